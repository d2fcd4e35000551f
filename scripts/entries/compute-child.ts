import { serveComputations } from '@/jobs/compute/child';

serveComputations();

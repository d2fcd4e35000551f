import type { Metadata } from 'next';
import Link from 'next/link';
import { safeDestination } from '@/components/sign-in/destination';
import { SignInForm } from '@/components/sign-in/sign-in-form';
import { SpectralLines } from '@/components/sign-in/spectral-lines';
import { Wordmark } from '@/components/ui/wordmark';

export const metadata: Metadata = { title: 'Sign in' };

export default async function SignInPage({
  searchParams,
}: {
  searchParams: Promise<{ next?: string | string[]; callbackUrl?: string | string[] }>;
}) {
  const { next, callbackUrl } = await searchParams;
  return (
    <main className="min-h-screen pb-12 pt-10 hand:pt-[14vh]">
      <div className="mx-sheet-x-narrow w-auto pb-8 hand:ml-[max(32px,calc(33.3%-160px))] hand:w-[320px]">
        <Wordmark heightPx={48} />
      </div>
      <SpectralLines />
      <div className="mx-sheet-x-narrow pt-8 hand:ml-[max(32px,calc(33.3%-160px))] hand:w-[320px]">
        <h1 className="pb-4 font-serif text-title-narrow font-title tracking-[-.008em] hand:text-title">
          Sign in
        </h1>
        <SignInForm destination={safeDestination(next ?? callbackUrl)} />
        <p className="pt-6 text-note text-ink-2">
          Password forgotten? <Link href="/new-password">Have a link sent</Link>. No account? Your
          laboratory&rsquo;s administrator sends invitations.
        </p>
      </div>
    </main>
  );
}

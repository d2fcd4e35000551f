import { citationText } from './citation';
import { conditionEntities } from './crate-conditions';
import type { Entity } from './crate-entity';
import { licenceOf } from './licences';
import { orcidUrl } from './orcid';
import { rehearsalText } from './package-texts';
import { mediaTypeOf, type PackedFile } from './packed-file';
import type { Contributor, ExportPlan, PlannedAnalysis } from './plan';

const ref = (id: string) => ({ '@id': id });

const SPECIFICATION = 'https://w3id.org/ro/crate/1.2';
const SOFTWARE = '#beadline';
const LABORATORY = '#laboratory';

/**
 * `ro-crate-metadata.json` of an attached crate (RO-Crate 1.2, https://w3id.org/ro/crate/1.2): files with sizes and
 * hashes, people, licence, and for each analysis an action that leads from the recording's bytes through code,
 * recipe and conditions to its files.
 */
export function roCrate(plan: ExportPlan, files: readonly PackedFile[]): Record<string, unknown> {
  const people = plan.contributors.map(person);
  const folders = plan.analyses.map((analysis) => folderEntity(analysis, files));
  const loose = files.filter(({ analysisId }) => analysisId === null);
  const graph: Entity[] = [
    {
      '@id': 'ro-crate-metadata.json',
      '@type': 'CreativeWork',
      about: ref('./'),
      conformsTo: ref(SPECIFICATION),
    },
    {
      '@id': './',
      '@type': 'Dataset',
      name: plan.title,
      description: plan.description || `Analyses of tracer particles in superfluid helium: ${plan.title}.`,
      datePublished: plan.date,
      license: ref(licenceOf(plan.licence).url),
      creditText: citationText(plan),
      publisher: ref(LABORATORY),
      ...(people.length > 0 ? { author: people.map((one) => ref(one['@id'])) } : {}),
      hasPart: [...loose.map(({ path }) => ref(path)), ...folders.map((one) => ref(one['@id']))],
      mentions: plan.analyses.map(({ id }) => ref(actionId(id))),
    },
    licenceEntity(plan.licence),
    { '@id': LABORATORY, '@type': 'Organization', name: plan.laboratory },
    ...people,
    ...affiliations(plan.contributors),
    ...software(plan),
    ...folders,
    ...files.map(fileEntity),
    ...plan.analyses.flatMap((analysis) => analysisEntities(analysis, files, plan.contributors)),
  ];
  return { '@context': `${SPECIFICATION}/context`, '@graph': withoutDoubles(graph) };
}

const actionId = (analysis: string) => `#analysis-${analysis}`;
const recordingId = (recording: string) => `#recording-${recording}`;
const folderId = ({ folder }: PlannedAnalysis) => `${folder}/`;
const softwareId = (version: string) => `${SOFTWARE}-${encodeURIComponent(version)}`;
const affiliationId = (name: string) => `#affiliation-${encodeURIComponent(name)}`;

function person({ name, orcid, affiliation }: Contributor): Entity {
  return {
    '@id': orcid ? orcidUrl(orcid) : `#person-${encodeURIComponent(name)}`,
    '@type': 'Person',
    name,
    ...(affiliation ? { affiliation: ref(affiliationId(affiliation)) } : {}),
  };
}

const affiliations = (contributors: readonly Contributor[]): Entity[] =>
  contributors.flatMap(({ affiliation }) =>
    affiliation ? [{ '@id': affiliationId(affiliation), '@type': 'Organization', name: affiliation }] : [],
  );

function licenceEntity(id: string): Entity {
  const { name, url, allows } = licenceOf(id);
  return { '@id': url, '@type': 'CreativeWork', name, identifier: id, description: allows };
}

/** One entry per version that computed or packed. */
function software({ codeVersion, analyses }: ExportPlan): Entity[] {
  const versions = [...new Set([codeVersion, ...analyses.map((one) => one.codeVersion)])].sort();
  return versions.map((version) => ({
    '@id': softwareId(version),
    '@type': 'SoftwareApplication',
    name: 'Beadline',
    version,
  }));
}

function fileEntity({ path, bytes, sha256, title, table }: PackedFile): Entity {
  return {
    '@id': path,
    '@type': 'File',
    name: title,
    ...(table ? { description: table.description } : {}),
    encodingFormat: mediaTypeOf(path),
    contentSize: String(bytes),
    sha256,
  };
}

function signOffText(signedOff: PlannedAnalysis['signedOff']): string {
  if (!signedOff) return 'Not signed off: later versions may differ.';
  const { at, by, contentHash } = signedOff;
  const who = by ? ` by ${by}` : '';
  return `Signed off on ${at.slice(0, 10)}${who}. SHA-256 of what was signed off: ${contentHash}.`;
}

function folderEntity(analysis: PlannedAnalysis, files: readonly PackedFile[]): Entity {
  const { campaign, run, recording, rehearsal } = analysis;
  const parts = files.filter(({ analysisId }) => analysisId === analysis.id);
  return {
    '@id': folderId(analysis),
    '@type': 'Dataset',
    name: `${campaign.name}, ${run.name}, ${recording.name}`,
    description: [rehearsal && rehearsalText(rehearsal.kind), signOffText(analysis.signedOff)]
      .filter(Boolean)
      .join(' '),
    hasPart: parts.map(({ path }) => ref(path)),
  };
}

function analysisEntities(
  analysis: PlannedAnalysis,
  files: readonly PackedFile[],
  contributors: readonly Contributor[],
): Entity[] {
  const { recording, run, rehearsal } = analysis;
  const conditions = conditionEntities(analysis);
  // Who is a contributor too is one person, with their ORCID where it is known.
  const agent = analysis.createdBy
    ? person(
        contributors.find(({ name }) => name === analysis.createdBy) ?? {
          name: analysis.createdBy,
          orcid: null,
          affiliation: null,
        },
      )
    : null;
  return [
    {
      '@id': recordingId(recording.id),
      '@type': 'CreativeWork',
      name: recording.name,
      description: `${rehearsal ? `${rehearsalText(rehearsal.kind)} Stack` : 'Camera stack'} of ${recording.frames} frames of ${recording.width} x ${recording.height} px, ${recording.bytes} bytes, not part of this package.`,
      ...(recording.sha256 ? { identifier: `sha256:${recording.sha256}` } : {}),
      ...(run.startedAt ? { dateCreated: run.startedAt } : {}),
    },
    ...(agent ? [agent] : []),
    ...conditions,
    {
      '@id': actionId(analysis.id),
      '@type': 'CreateAction',
      name: `Analysis of ${recording.name}`,
      identifier: analysis.id,
      instrument: ref(softwareId(analysis.codeVersion)),
      ...(agent ? { agent: ref(agent['@id']) } : {}),
      ...(analysis.startedAt ? { startTime: analysis.startedAt } : {}),
      ...(analysis.finishedAt ? { endTime: analysis.finishedAt } : {}),
      object: [ref(recordingId(recording.id)), ...conditions.map((one) => ref(one['@id']))],
      result: [
        ref(folderId(analysis)),
        ...files.filter(({ analysisId }) => analysisId === analysis.id).map(({ path }) => ref(path)),
      ],
    },
  ];
}

/** Things that are named from several places stand in the graph once: the first wins. */
function withoutDoubles(graph: readonly Entity[]): Entity[] {
  const seen = new Map<string, Entity>();
  for (const entity of graph) if (!seen.has(entity['@id'])) seen.set(entity['@id'], entity);
  return [...seen.values()];
}

import { CompareTable } from '@/components/compare/compare-table';
import { RUN_COLUMNS } from '@/components/compare/run-columns';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Lede, PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { countOf } from '@/lib/format/count';
import type { ReportedEvent } from '@/lib/report/events';
import { METHODS_IN_WORDS } from '@/lib/report/methods';
import type { CampaignView } from '@/lib/views/campaign-view';
import type { CompareView } from '@/lib/views/compare-view';
import { ReportConditions, type ReportedConditions } from './report-conditions';
import { ReportEvents } from './report-events';
import { ReportFigures } from './report-figures';

const GAMMA = { siPerUnit: 1e4, unit: 's/cm^2' };
/** Columns of the table of results: what the reader of a paper asks for, every method that gave something. */
const RESULT_COLUMNS = ['vns', 'density', 'spacing', 'trapped', 'events', 'tail', 'agreement'];

export interface ReportOrigin {
  runName: string;
  recording: string;
  sha256: string | null;
  recipeName: string | null;
  codeVersion: string;
  corrections: number;
  contentHash: string | null;
}

interface ReportSheetProps {
  laboratory: string;
  campaign: CampaignView;
  comparison: CompareView;
  conditions: readonly ReportedConditions[];
  events: readonly ReportedEvent[];
  /** Sentences that a reader must know. */
  cautions: readonly { about: string; words: string }[];
  safety: readonly string[];
  origins: readonly ReportOrigin[];
  /** When the page was made, as ISO text. */
  at: string;
}

/** A campaign on paper: conditions, methods in words, figures, estimates, cautions and sign-offs. */
export function ReportSheet(props: ReportSheetProps) {
  const { laboratory, campaign, comparison, conditions, events, cautions, safety, origins, at } = props;
  const { runs, fits } = comparison;
  const analysed = runs.filter(({ analysisId }) => analysisId !== null);
  const signed = runs.filter(({ signedOff }) => signedOff !== null);
  const methods = RUN_COLUMNS.filter(({ key, cell }) => key.startsWith('density-') && key !== 'density-combined' && runs.some((run) => run.lineDensities_m2.some(({ method }) => `density-${method}` === key) && cell(run))); // prettier-ignore
  const marks = fits.map(({ campaignId }) => campaignId);
  return (
    <Sheet>
      <PageTitle
        aside={
          <span className="text-note">
            {laboratory}, <Moment at={at} />
          </span>
        }
      >
        {campaign.name}
      </PageTitle>
      <Lede>
        {countOf(runs.length, 'run')}, {analysed.length} of them analysed, {signed.length} signed off.
      </Lede>
      {campaign.description ? (
        <p className="max-w-[84ch] whitespace-pre-wrap pt-2">{campaign.description}</p>
      ) : null}
      <Section title="Conditions">
        <ReportConditions runs={conditions} />
      </Section>
      {analysed.length === 0 ? (
        <EmptyState>
          No recording of this campaign has been analysed yet, so there is nothing to report.
        </EmptyState>
      ) : (
        <>
          <ReportFigures comparison={comparison} campaignId={campaign.id} />
          <Section title="Results" count="intervals of 95 %">
            <CompareTable runs={runs} campaigns={marks} columns={RESULT_COLUMNS} mayLeaveOut={false} bare />
            {methods.length > 0 ? (
              <div className="pt-4">
                <CompareTable
                  runs={runs}
                  campaigns={marks}
                  columns={methods.map(({ key }) => key)}
                  mayLeaveOut={false}
                  bare
                />
              </div>
            ) : null}
            {fits.map((fit) =>
              fit.gamma_s_m2 && fit.v0_m_s ? (
                <p key={fit.campaignId} className="pt-2">
                  <i className="font-serif">γ</i> = <Quantity {...fit.gamma_s_m2} {...GAMMA} />,{' '}
                  <i className="font-serif">v</i>
                  <sub className="font-serif">0</sub> ={' '}
                  <Quantity {...fit.v0_m_s} siPerUnit={1e-3} unit="mm/s" /> from {countOf(fit.runs, 'run')}
                  {fit.publishedGamma_s_m2 === null ? null : (
                    <>
                      ; published (unverified): <Quantity value={fit.publishedGamma_s_m2} {...GAMMA} />
                    </>
                  )}
                  . {fit.note} {/* prettier-ignore */}
                </p>
              ) : fit.note ? (
                <p key={fit.campaignId} className="pt-2 text-ink-2">
                  {fit.note}
                </p>
              ) : null,
            )}
          </Section>
          <ReportEvents events={events} />
        </>
      )}
      <Section title="Cautions">
        {cautions.length === 0 ? (
          <p className="text-ink-2">Nothing beyond the assumptions of each method.</p>
        ) : (
          <ul className="max-w-[96ch] list-disc pl-5">
            {cautions.map(({ about, words }, i) => (
              <li key={i} className="py-[2px]">
                <b className="font-strong">{about}:</b> {words}
              </li>
            ))}
          </ul>
        )}
        {safety.map((words) => (
          <p key={words} className="max-w-[96ch] pt-1 text-note text-ink-2">
            {words}
          </p>
        ))}
      </Section>
      <Section title="Sign-offs and origin" count="what each number can be traced to">
        <OriginTable origins={origins} comparison={comparison} />
      </Section>
      <Section title="Methods">
        <dl className="grid max-w-[96ch] gap-x-4 gap-y-2 hand:grid-cols-[150px_minmax(0,1fr)] print:grid-cols-[34mm_minmax(0,1fr)]">
          {METHODS_IN_WORDS.map(({ step, words, source }) => (
            <div key={step} className="contents">
              <dt className="font-strong">{step}</dt>
              <dd>
                {words} <span className="text-ink-2">({source})</span>
              </dd>
            </div>
          ))}
        </dl>
      </Section>
    </Sheet>
  );
}

function OriginTable({ origins, comparison }: { origins: readonly ReportOrigin[]; comparison: CompareView }) {
  if (origins.length === 0) return <p className="text-ink-2">Nothing has been analysed yet.</p>;
  const signOf = (runName: string) =>
    comparison.runs.find((run) => run.runName === runName)?.signedOff ?? null;
  const short = (hash: string | null) => (hash ? `${hash.slice(0, 16)}…` : '');
  return (
    <Table label="Sign-offs and origin" density="dense">
      <thead>
        <tr>
          <HeadCell>Run</HeadCell>
          <HeadCell>Recording, SHA-256</HeadCell>
          <HeadCell narrow="hide">Recipe, code</HeadCell>
          <HeadCell numeric narrow="hide">
            Corrections
          </HeadCell>
          <HeadCell>Signed off</HeadCell>
        </tr>
      </thead>
      <tbody>
        {origins.map((one) => {
          const signed = signOf(one.runName);
          return (
            <Row key={`${one.runName} ${one.recording}`}>
              <Cell head>{one.runName}</Cell>
              <Cell className="[overflow-wrap:anywhere]">
                {one.recording}
                <CellNote>{short(one.sha256)}</CellNote>
              </Cell>
              <Cell narrow="hide">
                {one.recipeName ?? 'unnamed recipe'}
                <CellNote>{one.codeVersion}</CellNote>
              </Cell>
              <Cell numeric narrow="hide">
                {one.corrections}
              </Cell>
              <Cell>
                {signed ? (
                  <>
                    <Moment at={signed.at} />
                    {signed.by ? `, ${signed.by}` : ''}
                    <CellNote>{short(one.contentHash)}</CellNote>
                  </>
                ) : (
                  'no: later versions may differ'
                )}
              </Cell>
            </Row>
          );
        })}
      </tbody>
    </Table>
  );
}

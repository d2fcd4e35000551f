export const LOCAL_STAGES = [
  'check',
  'measure-image',
  'detect-spots',
  'link-tracks',
  'measure-flow',
] as const;
export type LocalStage = (typeof LOCAL_STAGES)[number];

/** What a stage passes on to the pieces of work that it consists of. */
export interface StageOptions {
  onProgress: (share: number) => void;
  onCpu: (cpuS: number) => void;
}

/** How long each stage takes by the clock on the wall and in processor time. */
export class StageClock {
  readonly timingsS = {} as Record<LocalStage, number>;
  readonly cpuS = Object.fromEntries(LOCAL_STAGES.map((stage) => [stage, []])) as unknown as Record<
    LocalStage,
    number[]
  >;
  private readonly began = new Map<LocalStage, number>();

  constructor(private readonly tell: (stage: LocalStage, share: number) => void = () => undefined) {}

  begin(stage: LocalStage): void {
    this.began.set(stage, performance.now());
    this.tell(stage, 0);
  }

  end(stage: LocalStage): void {
    this.timingsS[stage] = (performance.now() - (this.began.get(stage) ?? Number.NaN)) / 1000;
    this.tell(stage, 1);
  }

  progressOf(stage: LocalStage): (share: number) => void {
    return (share) => this.tell(stage, share);
  }

  cpuOf(stage: LocalStage): (cpuS: number) => void {
    return (cpuS) => this.cpuS[stage].push(cpuS);
  }

  async time<T>(stage: LocalStage, work: (options: StageOptions) => Promise<T>): Promise<T> {
    this.begin(stage);
    const result = await work({ onProgress: this.progressOf(stage), onCpu: this.cpuOf(stage) });
    this.end(stage);
    return result;
  }
}

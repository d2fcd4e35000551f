'use client';

import Link from 'next/link';
import { useEffect, useRef, useState, type KeyboardEvent } from 'react';
import type { NearLayer, NearScene, OverlayScene } from '@/components/canvas/frame-well';
import { drawTracks } from '@/components/canvas/draw-tracks';
import { TRAIL_FRAMES } from '@/components/canvas/track-blocks';
import type { Point } from '@/components/canvas/view-box';
import { tagChosen } from '@/components/canvas/track-overlay';
import { useViewer, useViewerStore } from '@/components/canvas/use-viewer';
import type { ViewedRecording } from '@/components/canvas/viewer-panel';
import { ViewerPanel } from '@/components/canvas/viewer-panel';
import { useMeasures } from '@/components/data/use-measures';
import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { Fold } from '@/components/ui/fold';
import { PageTitle, Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { StrokeLegend } from '@/components/ui/strokes';
import { BlocksNote } from './blocks-note';
import { ChosenFacts, FindTrack } from './chosen-facts';
import { drawBegunLine, drawMarks } from './draw-marks';
import { measureDrawing } from './draw-times';
import type { Tool } from './edit-state';
import { MarkedLines } from './marked-lines';
import { drawCandidateTracks, drawGhosts, drawMagnifier, drawPlace } from './draw-edit';
import { EDIT_KEYS, editCommandOf, PLACE_KEYS } from './edit-keys';
import { FilterFields } from './filter-fields';
import { PeopleHere } from './people-here';
import { KeyList, SaidLine } from './said-line';
import { ToolLine } from './tool-line';
import { TrackList } from './track-list';
import { useEdit } from './use-edit';
import { useEditSession, type EditorSetup } from './use-edit-session';
import { StaleResults, WaitingNote } from './waiting-note';

interface EditorSheetProps extends EditorSetup {
  recording: ViewedRecording;
  /** Why this person can only look; null when they can correct. */
  readOnly: string | null;
  title: string;
  /** The frame to open at. */
  frame: number;
  /** The track to open with; null for none. */
  track: number | null;
}

/** The track editor: frames and tracks to work in, and beside them everything as text. */
export function EditorSheet(props: EditorSheetProps) {
  const { recording } = props;
  const viewer = useViewerStore(recording.frames, {
    frame: props.frame,
    low: recording.low,
    high: recording.high,
  });
  const editor = useEditSession({ ...props, viewer, recording });
  const { session, controller, people } = editor;
  const measures = useMeasures(props.analysisId, true);
  const version = useEdit(session.state, (state) => state.version);
  const closed = useEdit(session.state, (state) => state.closed);
  const brightness = useViewer(viewer, (state) => state.brightness);
  const magnifier = useEdit(session.state, (state) => state.magnifier);
  const ghosts = useEdit(session.state, (state) => state.ghosts);
  const look = useEdit(session.state, (state) => state.tool);
  const redrawNear = useRef<(() => void) | null>(null);
  const locked = closed !== null || props.readOnly !== null;
  const image = { width: recording.width, height: recording.height };

  const onKey = (event: KeyboardEvent): boolean => {
    const { kind: tool } = session.state.get().tool;
    const joining = tool === 'join';
    if (joining && event.key === 'Enter') {
      controller.run({ kind: 'place' });
      return true;
    }
    const drawing = tool === 'line';
    const command = editCommandOf(event, tool === 'place' || drawing, drawing);
    if (!command) return false;
    controller.run(command);
    return true;
  };

  const drawOverlay = (scene: OverlayScene) => {
    const began = performance.now();
    const { ctx, state, view, well, colours } = scene;
    session.blocks?.want(state.frame, state.direction);
    const block = session.block(state.shown);
    if (!block) return;
    const { shown: frame, chosenTrack: chosen } = state;
    drawTracks(ctx, block, { frame, trailFrames: TRAIL_FRAMES, view, well, colours, chosen });
    const { tool, ghosts: withGhosts } = session.state.get();
    const track = session.track(chosen);
    if (track && withGhosts) drawGhosts(scene, track, frame);
    if (tool.kind === 'join') {
      const all = session.block(frame, false);
      if (all) drawCandidateTracks(scene, all, controller.candidates(), tool.second);
    }
    drawMarks(scene, session.marks.lines(frame));
    if (chosen !== null) tagChosen(scene, block, chosen, frame);
    measureDrawing(began, { frame, tracks: block.count, chosen, version: session.state.get().version });
  };

  const [near] = useState<NearLayer>(() => ({
    attach: (redraw) => {
      redrawNear.current = redraw;
    },
    draw: (scene) => {
      const { tool, magnifier: on } = session.state.get();
      const place = tool.kind === 'place' ? tool.at : null;
      if (place) drawPlace(scene, place, null);
      if (tool.kind === 'line') drawLineTool(scene, tool, controller.focus ?? tool.at);
      const { focus } = controller;
      if (on && focus) drawMagnifier(scene, image, focus, session.block(scene.state.shown));
    },
  }));

  useEffect(() => session.state.subscribe(() => redrawNear.current?.()), [session]);

  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-5 aside:grid-cols-[minmax(0,1fr)_344px]">
      <div className="min-w-0">
        <PageTitle
          state={
            closed !== null ? (
              <StateWord state="signed">signed off by {closed}</StateWord>
            ) : props.readOnly !== null ? (
              <StateWord state="stopped">to look at</StateWord>
            ) : null
          }
          aside={<PeopleHere people={people} />}
        >
          {props.title}
        </PageTitle>
        {props.readOnly !== null && closed === null ? (
          <p className="pb-2 text-note">{props.readOnly}</p>
        ) : null}
        <ToolLine
          state={session.state}
          marks={session.marks}
          viewer={viewer}
          readOnly={locked}
          onCommand={(command) => controller.run(command)}
        />
        <SaidLine session={session} />
        <ViewerPanel
          store={viewer}
          recording={recording}
          spotsPerFrame={measures.data?.spotsPerFrame ?? []}
          drawOverlay={drawOverlay}
          overlayVersion={`${version} ${ghosts} ${look.kind} ${look.kind === 'join' ? look.second : ''}`}
          onPick={(place, reachPx) => controller.pick(place, reachPx)}
          maxHeight="min(72vh, 860px)"
          work={{
            onKey,
            near,
            pointer: {
              grab: (place, reachPx) => controller.grab(place, reachPx),
              hover: (place) => {
                controller.point(place);
                const { magnifier: near, tool } = session.state.get();
                if (near || tool.kind === 'line') redrawNear.current?.();
              },
            },
          }}
          onWell={<BlocksNote session={session} viewer={viewer} />}
          controls={
            <div className="flex flex-wrap items-center gap-x-4 gap-y-2 pt-2 print:hidden">
              <Segment
                label="Brightness"
                showLabel={false}
                options={[
                  { value: 'linear', label: 'Linear' },
                  { value: 'log', label: 'Logarithmic' },
                ]}
                value={brightness}
                onChange={(value) => viewer.set({ brightness: value })}
              />
              <Button
                aria-pressed={magnifier}
                keyCap="L"
                onClick={() => controller.run({ kind: 'magnifier' })}
                className={magnifier ? 'bg-ink! text-paper!' : ''}
              >
                Magnifier
              </Button>
              <Button
                aria-pressed={ghosts}
                keyCap="H"
                onClick={() => controller.run({ kind: 'ghosts' })}
                className={ghosts ? 'bg-ink! text-paper!' : ''}
              >
                Past and future
              </Button>
              <Fold title="Keys for the tracks" className="basis-full">
                <KeyList keys={EDIT_KEYS} />
                <p className="text-small text-ink-2">While a place is looked for:</p>
                <KeyList keys={PLACE_KEYS} />
              </Fold>
            </div>
          }
        >
          <StrokeLegend
            onWell
            strokes={['trapped', 'free', 'undecided', 'marked line']}
            note={`trails of ${TRAIL_FRAMES} frames`}
          />
        </ViewerPanel>
      </div>
      <div className="min-w-0">
        <Section title="Stored" flush>
          <WaitingNote session={session} />
          <StaleResults session={session} />
          <p className="pt-1 text-note">
            <Link href={`/analyses/${props.analysisId}/history`}>What was done, by whom</Link>
          </p>
        </Section>
        <Section title="Chosen track">
          <ChosenFacts analysisId={props.analysisId} session={session} viewer={viewer} />
        </Section>
        <Section title="Marked lines">
          <MarkedLines
            session={session}
            viewer={viewer}
            locked={locked}
            onCommand={(command) => controller.run(command)}
          />
        </Section>
        <Section title="Tracks in this frame">
          <FindTrack onFind={editor.find} />
          <FilterFields state={session.state} />
          <TrackList
            session={session}
            viewer={viewer}
            onChoose={(track) => controller.choose(track, true)}
            onKey={onKey}
          />
        </Section>
      </div>
    </div>
  );
}

/** The line that is being drawn, to where the pointer is, with a cross there. */
function drawLineTool(scene: NearScene, tool: Extract<Tool, { kind: 'line' }>, at: Point): void {
  if (tool.points.length > 0 && tool.frame === scene.state.shown) drawBegunLine(scene, tool.points, at);
  drawPlace(scene, at, null);
}

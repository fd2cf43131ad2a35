import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { How } from '../engine/engine';
import { freezeKept } from '../engine/freeze';
import type { HandlersOf } from './answer';
import { fittedText } from './fits';
import { planOf } from './open-project';
import { said } from './plan-in';
import { projectName } from './recent';
import type { WindowState } from './window-state';

type Questions =
  | 'report.pages'
  | 'report.note'
  | 'report.decide'
  | 'report.freeze'
  | 'report.check'
  | 'report.sign-off'
  | 'answer.cover'
  | 'answer.uncover';

export function reportHandlers(state: WindowState): HandlersOf<Questions> {
  return {
    'report.pages': ({ planId, edition }) =>
      state.jobs.during('report.pages', (how) =>
        edition === null ? pagesOf(state, planId, how) : editionPages(state, edition, how),
      ),
    'report.note': ({ place, text, author: given }) =>
      by(given, (author) =>
        state.changed(({ project }) => {
          const now = project.notes().find((note) => note.place === place)?.text ?? null;
          return now === text ? done(null) : project.setNote({ place, text, author });
        }),
      ),
    'report.decide': (ask) =>
      by(ask.author, (author) =>
        state.changed(({ project }) => {
          const text = said(ask.text, 'text');
          return text.ok ? project.decide({ author, text: text.value }) : text;
        }),
      ),
    'report.freeze': ({ planId, author: given }) =>
      by(given, (author) => state.jobs.during('report.freeze', (how) => freeze(state, { planId, author }, how))),
    'report.check': ({ edition }) => state.jobs.during('report.check', (how) => check(state, edition, how)),
    'report.sign-off': ({ edition, role: given, author: by_ }) =>
      by(by_, (author) =>
        state.changed(({ project }) => {
          const role = said(given, 'role');
          return role.ok ? project.signOff({ edition, role: role.value, author }) : role;
        }),
      ),
    'answer.cover': ({ author: given }) =>
      by(given, (author) =>
        state.changed(({ project }) => (project.isAnswerCovered() ? done(null) : project.coverAnswer({ author }))),
      ),
    'answer.uncover': ({ author: given }) =>
      by(given, (author) =>
        state.changed(({ project }) => {
          const isInView = !project.isAnswerCovered() && project.trail('answer-uncovered').length > 0;
          return isInView ? done(null) : project.uncoverAnswer({ author });
        }),
      ),
  };
}

/** Author names are asked for: one that is blank is none. */
async function by<T>(given: string, work: (author: string) => Promise<Outcome<T>>): Promise<Outcome<T>> {
  const author = said(given, 'author');
  return author.ok ? work(author.value) : author;
}

/** The pages of a plan as it stands: the bytes that `run` writes, with the project's notes where there are any. */
async function pagesOf(state: WindowState, planId: number, how: How) {
  const fitted = await fittedText(state, planId, how);
  if (!fitted.ok) return fitted;
  const { text: result } = fitted.value;
  return state.reading(({ project }) =>
    state.engine.ask('print', { result, edition: null, notes: project.notes() }, how),
  );
}

/** The pages of an edition as they were frozen, to the byte. */
function editionPages(state: WindowState, number: number, how: How) {
  return state.reading(async ({ project, file }) => {
    const [edition] = project.editions(number);
    if (edition === undefined) return refuse('no-edition', { file });
    const printed = await state.engine.ask('print', { result: edition.result, edition: edition.facts }, how);
    return printed.ok ? done({ document: printed.value.document, pdf: Uint8Array.from(edition.report) }) : printed;
  });
}

async function freeze(
  state: WindowState,
  { planId, author }: { readonly planId: number; readonly author: string },
  how: How,
) {
  const fitted = await fittedText(state, planId, how);
  if (!fitted.ok) return fitted;
  const { stateId, text: result } = fitted.value;
  const frozen = await state.changing((open) => {
    const plan = planOf(open, planId);
    if (!plan.ok) return plan;
    if (plan.value.stateId !== stateId) return refuse('cancelled', {});
    return freezeKept(open.project, {
      author,
      name: projectName(open.file),
      keep: () => open.project.keepFit({ planId, result }),
      print: async (edition) => {
        const printed = await state.engine.ask('print', { result, edition }, how);
        return printed.ok ? done(printed.value.pdf) : printed;
      },
    });
  });
  if (!frozen.ok) return frozen;
  const project = await state.look();
  return project.ok ? done({ ...frozen.value, project: project.value }) : project;
}

/** Makes an edition again from its plan and the bytes that the project holds, and compares. */
function check(state: WindowState, number: number, how: How) {
  return state.reading(({ project }) =>
    project.checkEdition(number, async ({ plan, inputs, facts }) => {
      const result = await state.engine.ask('run', { plan, inputs }, how);
      if (!result.ok) return result;
      return done({
        result: result.value,
        report: async () => {
          const printed = await state.engine.ask('print', { result: result.value, edition: facts }, how);
          if (!printed.ok) throw new Error(`the report was not printed: ${printed.problems[0]?.code}`);
          return printed.value.pdf;
        },
      });
    }),
  );
}

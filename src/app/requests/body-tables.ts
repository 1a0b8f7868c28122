import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import type {ForceAnswer, MomentAnswer} from '../../../shared/api';
import {NumberText} from '../format/number-text';
import {columnWriter, significant, type WrittenNumber} from '../format/numbers';

interface Row {
  readonly name: string;
  readonly cells: readonly (number | null)[];
}

interface Table {
  readonly title: string;
  readonly heads: readonly string[];
  readonly rows: readonly Row[];
}

interface Xyz {
  readonly x: number;
  readonly y: number;
  readonly z: number;
}

const three = (vector: Xyz | null): (number | null)[] =>
  vector ? [vector.x, vector.y, vector.z] : [null, null, null];

function forceTables({bodies, interactions, energy, units}: ForceAnswer): Table[] {
  const {charge, force, torque, energy: joule} = units;
  const hasBounds = bodies.some(body => body.forceBound !== undefined);
  return [
    {
      title: 'Force and torque on each body',
      heads: [
        'Body',
        `Charge, ${charge}`,
        ...['Fx', 'Fy', 'Fz'].map(name => `${name}, ${force}`),
        ...['Tx', 'Ty', 'Tz'].map(name => `${name}, ${torque}`),
        ...(hasBounds ? [`Bound of F, ${force}`] : []),
      ],
      rows: bodies.map(body => ({
        name: body.id,
        cells: [
          body.charge,
          ...three(body.force),
          ...three(body.torque),
          ...(hasBounds ? [body.forceBound ?? null] : []),
        ],
      })),
    },
    {
      title: 'Interactions',
      heads: ['Of, on', ...['Fx', 'Fy', 'Fz'].map(name => `${name}, ${force}`), `Energy, ${joule}`],
      rows: [
        ...(interactions ?? []).map(({of, on, force: exerted, energy: pair}) => ({
          name: `${of} on ${on}`,
          cells: [...three(exerted), pair],
        })),
        {name: 'All bodies together', cells: [null, null, null, energy]},
      ],
    },
  ];
}

function momentTables({bodies, assembly, about, units}: MomentAnswer): Table[] {
  const {charge, length, dipole, quadrupole} = units;
  const all = [...bodies, {...assembly, id: 'Assembly'}];
  const place = [about.x, about.y, about.z].map(value => significant(value, 4).digits).join(', ');
  return [
    {
      title: `Charge, centre and dipole about (${place}) ${length}`,
      heads: [
        'Body',
        `Charge, ${charge}`,
        ...['x', 'y', 'z'].map(name => `Centre ${name}, ${length}`),
        ...['px', 'py', 'pz'].map(name => `${name}, ${dipole ?? ''}`),
      ],
      rows: all.map(body => ({
        name: body.id,
        cells: [body.charge, ...three(body.centre), ...three(body.dipole)],
      })),
    },
    {
      title: 'Quadrupole, traceless',
      heads: [
        'Body',
        ...['xx', 'xy', 'xz', 'yy', 'yz', 'zz'].map(name => `Q${name}, ${quadrupole ?? ''}`),
      ],
      rows: all.map(({id, quadrupole: q}) => ({
        name: id,
        cells: [q.xx, q.xy, q.xz, q.yy, q.yz, q.zz],
      })),
    },
  ];
}

/** Components of one vector are written alike, so that a zero by symmetry shows as one. */
function written({heads, rows}: Table): (WrittenNumber | null)[][] {
  const unitOf = (index: number): string => heads[index + 1].split(', ').at(-1) ?? '';
  const writers = heads.slice(1).map((head, index) => {
    if (head.startsWith('Bound')) return (value: number) => significant(value, 2);
    const alike = rows.flatMap(({cells}) =>
      cells.filter(
        (value, other) =>
          value !== null &&
          unitOf(other) === unitOf(index) &&
          !heads[other + 1].startsWith('Bound'),
      ),
    );
    return columnWriter(alike.map(Number));
  });
  return rows.map(({cells}) =>
    cells.map((value, index) => (value === null ? null : writers[index](value))),
  );
}

/** Answers that have one row a body. */
@Component({
  selector: 'app-body-tables',
  imports: [NumberText],
  template: `
    @for (table of tables(); track table.title) {
      <h3>{{ table.title }}</h3>
      <div class="scroll-x" tabindex="0" role="region" [attr.aria-label]="table.title">
        <table class="ruled dense">
          <thead>
            <tr>
              @for (head of table.heads; track head) {
                <th scope="col" [class.end]="!$first">{{ head }}</th>
              }
            </tr>
          </thead>
          <tbody>
            @for (row of table.rows; track $index) {
              <tr>
                <th scope="row">{{ row.name }}</th>
                @for (cell of table.written[$index]; track $index) {
                  <td class="end">
                    @if (cell) {
                      <app-number [value]="cell" />
                    } @else {
                      <span class="variant">–</span>
                    }
                  </td>
                }
              </tr>
            }
          </tbody>
        </table>
      </div>
    }
  `,
  styles: `
    h3 {
      margin-block: 4px 6px;

      &:not(:first-child) {
        margin-block-start: 24px;
      }
    }

    th,
    td {
      white-space: nowrap;
    }

    tbody th {
      height: 36px;
    }

    .end {
      padding-inline-start: 16px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BodyTables {
  readonly answer = input.required<ForceAnswer | MomentAnswer>();
  protected readonly tables = computed(() => {
    const answer = this.answer();
    const tables = 'assembly' in answer ? momentTables(answer) : forceTables(answer);
    return tables.map(table => ({...table, written: written(table)}));
  });
}

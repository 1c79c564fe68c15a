import {
  CategoryScale,
  Chart,
  Filler,
  LinearScale,
  LineElement,
  PointElement,
  Tooltip,
  type ChartDataset,
  type ChartOptions,
} from 'chart.js';
import { useState } from 'react';
import { Line } from 'react-chartjs-2';
import { formatUnits, shortWeekLabel, weekLabel } from '../lib/format.ts';
import { useTheme } from '../lib/theme.ts';
import { Button } from './Button.tsx';
import { Table } from './Table.tsx';

Chart.register(CategoryScale, LinearScale, PointElement, LineElement, Filler, Tooltip);

/** One week of an outlook: sold, or the model with its ranges and the plan. Units. */
export interface OutlookWeek {
  weekStart: string;
  sold: number | null;
  planned: { model: number; plan: number; low95: number; low80: number; high80: number; high95: number } | null;
}

export interface OutlookTexts {
  label: string;
  caption: string;
  asTable: string;
  asChart: string;
  week: string;
  sold: string;
  model: string;
  plan: string;
  range80: string;
  range95: string;
}

/** The value of a token in the theme that is shown; canvases can't read custom properties themselves. */
function tokenOf(name: string): string {
  return getComputedStyle(document.documentElement).getPropertyValue(name).trim();
}

function fade(colour: string, share: number): string {
  const [red, green, blue] = [1, 3, 5].map((at) => Number.parseInt(colour.slice(at, at + 2), 16));
  return `rgb(${red} ${green} ${blue} / ${share})`;
}

/** What was sold and what is expected, with the 80 and 95 % ranges as bands, and the same as a table. */
export function OutlookChart({ weeks, texts }: { weeks: readonly OutlookWeek[]; texts: OutlookTexts }) {
  const [isTable, setTable] = useState(false);
  // Colours are read again when the theme changes.
  const { theme } = useTheme();
  return (
    <figure>
      <div className="flex justify-end">
        <Button variant="text" onClick={() => setTable(!isTable)}>
          {isTable ? texts.asChart : texts.asTable}
        </Button>
      </div>
      {isTable ? (
        <div className="max-h-80 overflow-y-auto" tabIndex={0} role="region" aria-label={texts.caption}>
          <OutlookTable weeks={weeks} texts={texts} />
        </div>
      ) : (
        <div className="h-64">
          <Line key={theme} data={drawData(weeks, texts)} options={drawOptions()} role="img" aria-label={texts.label} />
        </div>
      )}
      {!isTable && (
        <figcaption className="mt-1 flex flex-wrap gap-x-5 text-tiny text-soft">
          <span className="font-[620] text-ink">{texts.sold}</span>
          <span className="font-[620] text-sky">{texts.model}</span>
          <span className="font-[620] text-plum">{texts.plan}</span>
          <span>
            {texts.range80}, {texts.range95}
          </span>
        </figcaption>
      )}
    </figure>
  );
}

function OutlookTable({ weeks, texts }: { weeks: readonly OutlookWeek[]; texts: OutlookTexts }) {
  return (
    <Table caption={texts.caption}>
      <thead>
        <tr>
          <th scope="col">{texts.week}</th>
          {[texts.sold, texts.model, texts.plan, texts.range80, texts.range95].map((head) => (
            <th key={head} scope="col" className="num">
              {head}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {[...weeks].reverse().map(({ weekStart, sold, planned }) => (
          <tr key={weekStart}>
            <th scope="row">{weekLabel(weekStart)}</th>
            <td className="num">{sold === null ? '' : formatUnits(sold)}</td>
            <td className="num">{planned && formatUnits(planned.model)}</td>
            <td className="num">{planned && formatUnits(planned.plan)}</td>
            <td className="num">{planned && `${formatUnits(planned.low80)} – ${formatUnits(planned.high80)}`}</td>
            <td className="num">{planned && `${formatUnits(planned.low95)} – ${formatUnits(planned.high95)}`}</td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function drawData(weeks: readonly OutlookWeek[], texts: OutlookTexts) {
  const sky = tokenOf('--sky');
  const line = (
    label: string,
    pick: (week: OutlookWeek) => number | null,
    more: Partial<ChartDataset<'line', (number | null)[]>>,
  ): ChartDataset<'line', (number | null)[]> => ({
    label,
    data: weeks.map(pick),
    borderWidth: 0,
    pointRadius: 0,
    pointHitRadius: 6,
    tension: 0,
    ...more,
  });
  return {
    labels: weeks.map(({ weekStart }) => weekStart),
    datasets: [
      line(texts.sold, ({ sold }) => sold, { borderColor: tokenOf('--sold'), borderWidth: 1.5 }),
      line(texts.model, ({ planned }) => planned?.model ?? null, { borderColor: sky, borderWidth: 2 }),
      line(texts.plan, ({ planned }) => planned?.plan ?? null, {
        borderColor: tokenOf('--plum'),
        borderWidth: 1.5,
        borderDash: [4, 3],
      }),
      line('low95', ({ planned }) => planned?.low95 ?? null, {}),
      line('high95', ({ planned }) => planned?.high95 ?? null, { fill: '-1', backgroundColor: fade(sky, 0.14) }),
      line('low80', ({ planned }) => planned?.low80 ?? null, {}),
      line('high80', ({ planned }) => planned?.high80 ?? null, { fill: '-1', backgroundColor: fade(sky, 0.22) }),
    ],
  };
}

function drawOptions(): ChartOptions<'line'> {
  const soft = tokenOf('--soft');
  const font = { family: 'Public Sans Variable, sans-serif', size: 11 };
  return {
    responsive: true,
    maintainAspectRatio: false,
    animation: false,
    interaction: { mode: 'index', intersect: false },
    scales: {
      x: {
        grid: { display: false },
        border: { color: tokenOf('--ink') },
        ticks: {
          color: soft,
          font,
          maxRotation: 0,
          autoSkipPadding: 18,
          callback(value) {
            return shortWeekLabel(this.getLabelForValue(Number(value)));
          },
        },
      },
      y: {
        beginAtZero: true,
        border: { display: false },
        grid: { color: tokenOf('--line') },
        ticks: { color: soft, font, maxTicksLimit: 5, callback: (value) => formatUnits(Number(value)) },
      },
    },
    plugins: {
      legend: { display: false },
      tooltip: {
        filter: ({ datasetIndex, raw }) => datasetIndex < 3 && raw !== null,
        callbacks: {
          title: ([first]) => (first ? weekLabel(first.label) : ''),
          label: ({ dataset, raw }) => `${dataset.label ?? ''} ${formatUnits(Number(raw))}`,
        },
      },
    },
  };
}

import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  ElementRef,
  afterNextRender,
  computed,
  effect,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import {Announcer} from '../states/announcer';
import {ColourScheme} from '../theme/colour-scheme';
import {contoursOf, type Contour} from './contour-rings';
import {readInks} from './inks';
import {bleed, indexToPixel, nearestPoint, sheet, xOf, yOf, type Layout} from './layout';
import {bandColours, potentialScale, strengthScale, type Quantity, type Scale} from './levels';
import {paint, type Picture} from './paint';
import {readOut, spoken, type GridPoint} from './read-out';
import type {Section} from './section';

const KEYS: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowUp: [0, 1],
  ArrowDown: [0, -1],
};
const BOX = {width: 178, height: 92};

function mapOf(
  values: Float64Array | null,
  counts: readonly [number, number],
  scaleOf: (values: Float64Array) => Scale,
): {readonly scale: Scale; readonly contours: readonly Contour[]} {
  const known = values ?? new Float64Array();
  const scale = scaleOf(known);
  return {scale, contours: known.length > 0 ? contoursOf(known, counts, scale.levels) : []};
}

/** A map of a plane of grid values: bands, labelled contours, charges, arrows, and a read-out. */
@Component({
  selector: 'app-field-picture',
  templateUrl: './field-picture.html',
  styleUrl: './field-picture.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {'[class.bleed]': 'isBleed()'},
})
export class FieldPicture {
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly scheme = inject(ColourScheme);
  private readonly announcer = inject(Announcer);
  private readonly canvas = viewChild.required<ElementRef<HTMLCanvasElement>>('canvas');
  private readonly size = signal({width: 0, height: 0, ratio: 1});
  private readonly fontsReady = signal(false);
  private frame = 0;

  readonly section = input.required<Section>();
  readonly quantity = input<Quantity>('potential');
  readonly hasArrows = input(true);
  readonly lines = input<readonly Float64Array[]>([]);
  /** Fills its box without axes, for decoration. */
  readonly isBleed = input(false);
  /** How much of the ramp is used; less keeps a decoration pale. */
  readonly reach = input(1);
  /** About how many bands a map of the potential gets. */
  readonly bands = input(13);
  readonly tallest = input(480);

  protected readonly point = signal<GridPoint | null>(null);
  protected readonly isTouched = signal(false);

  private readonly isPotential = computed(() => this.quantity() === 'potential');
  private readonly values = computed(
    () =>
      (this.isPotential() ? this.section().potential : this.section().strength) ??
      new Float64Array(),
  );
  private readonly potentialMap = computed(() => {
    const {potential, counts} = this.section();
    return mapOf(potential, counts, values => potentialScale(values, this.bands()));
  });
  private readonly strengthMap = computed(() => {
    const {strength, counts} = this.section();
    return mapOf(strength, counts, strengthScale);
  });
  /** Each quantity keeps its contours, so that going back and forth between the two is quick. */
  private readonly map = computed(() =>
    this.isPotential() ? this.potentialMap() : this.strengthMap(),
  );
  protected readonly layout = computed<Layout | null>(() => {
    const {width, height} = this.size();
    if (width < 40) return null;
    return this.isBleed()
      ? bleed(this.section(), width, height)
      : sheet(this.section(), width, this.tallest());
  });
  protected readonly rows = computed(() => {
    const point = this.point();
    return point === null ? [] : readOut(this.section(), point);
  });
  protected readonly hair = computed(() => {
    const point = this.point();
    const layout = this.layout();
    if (point === null || layout === null) return null;
    const {a, b, c, d, e, f} = indexToPixel(this.section(), layout);
    const [x, y] = [a * point.i + c * point.j + e, b * point.i + d * point.j + f];
    return {x, y, ...this.boxPlace(x, y, layout)};
  });
  protected readonly label = computed(() => {
    const {charges, name} = this.section();
    const what =
      this.quantity() === 'potential' ? 'Map of the potential' : 'Map of the field strength';
    return `${what}. ${name}. ${charges.length} charges drawn. Arrow keys move the pointer, with Shift by ten.`;
  });

  constructor() {
    afterNextRender(() => {
      const observer = new ResizeObserver(() => this.measure());
      observer.observe(this.host);
      this.destroyRef.onDestroy(() => observer.disconnect());
      this.measure();
      void document.fonts?.ready.then(() => this.fontsReady.set(true));
    });
    effect(() => {
      const layout = this.layout();
      this.scheme.isDark();
      this.fontsReady();
      this.map();
      this.lines();
      this.hasArrows();
      const {ratio} = this.size();
      if (layout === null) return;
      cancelAnimationFrame(this.frame);
      this.frame = requestAnimationFrame(() => this.draw(layout, ratio));
    });
    this.destroyRef.onDestroy(() => cancelAnimationFrame(this.frame));
  }

  private readonly destroyRef = inject(DestroyRef);

  /** What is drawn now, for saving it at another size. */
  picture(layout: Layout): Picture {
    const {scale, contours} = this.map();
    const {units} = this.section();
    return {
      section: this.section(),
      values: this.values(),
      scale,
      contours,
      colours: bandColours(scale, this.scheme.isDark(), this.reach()),
      layout,
      inks: readInks(this.host),
      title: this.isPotential() ? `V, ${units.potential ?? 'V'}` : `|E|, ${units.field ?? 'V/m'}`,
      hasArrows: this.hasArrows(),
      lines: this.lines(),
    };
  }

  protected follow(event: PointerEvent): void {
    const layout = this.layout();
    if (layout === null || this.isBleed()) return;
    const {left, top} = this.canvas().nativeElement.getBoundingClientRect();
    this.isTouched.set(event.pointerType === 'touch');
    this.point.set(nearestPoint(this.section(), layout, event.clientX - left, event.clientY - top));
  }

  protected leave(event: PointerEvent): void {
    if (event.pointerType !== 'touch') this.point.set(null);
  }

  protected step(event: KeyboardEvent): void {
    const direction = KEYS[event.key];
    if (event.key === 'Escape') this.point.set(null);
    if (!direction || this.isBleed()) return;
    event.preventDefault();
    const {counts, iStep, jStep} = this.section();
    const by = event.shiftKey ? 10 : 1;
    const now = this.point() ?? {i: counts[0] >> 1, j: counts[1] >> 1};
    // To the right on the sheet is along the step that runs to the right, whichever index that is.
    const isTurned = Math.abs(jStep.u) > Math.abs(iStep.u);
    const [right, up] = [direction[0] * by, direction[1] * by];
    const [di, dj] = isTurned
      ? [up * (Math.sign(iStep.v) || 1), right * (Math.sign(jStep.u) || 1)]
      : [right * (Math.sign(iStep.u) || 1), up * (Math.sign(jStep.v) || 1)];
    const clamp = (value: number, count: number): number => Math.min(count - 1, Math.max(0, value));
    this.isTouched.set(false);
    this.point.set({i: clamp(now.i + di, counts[0]), j: clamp(now.j + dj, counts[1])});
    this.announcer.say(spoken(this.rows()));
  }

  private measure(): void {
    const width = Math.floor(this.host.clientWidth);
    const height = Math.floor(this.host.clientHeight);
    const now = this.size();
    const ratio = window.devicePixelRatio || 1;
    const isSame =
      now.width === width && now.ratio === ratio && (!this.isBleed() || now.height === height);
    if (!isSame) this.size.set({width, height, ratio});
  }

  private draw(layout: Layout, ratio: number): void {
    const canvas = this.canvas().nativeElement;
    canvas.width = Math.round(layout.width * ratio);
    canvas.height = Math.round(layout.height * ratio);
    canvas.style.width = `${layout.width}px`;
    canvas.style.height = `${layout.height}px`;
    const ctx = canvas.getContext('2d');
    if (!ctx) return;
    ctx.scale(ratio, ratio);
    paint(ctx, this.picture(layout));
    canvas.dataset['painted'] = String(Number(canvas.dataset['painted'] ?? 0) + 1);
  }

  /** The quadrant beside the pointer that hides the fewest charges. */
  private boxPlace(x: number, y: number, layout: Layout): {boxX: number; boxY: number} {
    const places = [
      [x + 14, y - 14 - BOX.height],
      [x + 14, y + 14],
      [x - 14 - BOX.width, y + 14],
      [x - 14 - BOX.width, y - 14 - BOX.height],
    ].map(([boxX, boxY]) => {
      const hidden = this.section().charges.filter(({u, v}) => {
        const [cx, cy] = [xOf(layout, u) - boxX, yOf(layout, v) - boxY];
        return cx > -9 && cy > -9 && cx < BOX.width + 9 && cy < BOX.height + 9;
      }).length;
      const isOut =
        boxX < 0 ||
        boxY < 0 ||
        boxX + BOX.width > layout.width ||
        boxY + BOX.height > layout.height;
      return {boxX, boxY, cost: hidden + (isOut ? 1e6 : 0)};
    });
    return places.reduce((best, place) => (place.cost < best.cost ? place : best));
  }
}

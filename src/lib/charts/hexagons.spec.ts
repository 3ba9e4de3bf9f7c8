import fc from 'fast-check';
import { expect, test } from 'vitest';
import { densityStep, hexCells, hexPaths, packCells } from './hexagons';

const lattice = { cellX: 2.2, rowY: 1.9 };

test('no reading is lost or counted twice in the density', () => {
	fc.assert(
		fc.property(fc.array(fc.tuple(fc.double({ min: 25, max: 230, noNaN: true }), fc.double({ min: -200, max: 230, noNaN: true })), { maxLength: 300 }), (points) => {
			const packed = packCells(hexCells(points.map((p) => p[0]), points.map((p) => p[1]), lattice));
			let total = 0;
			for (let i = 2; i < packed.length; i += 3) total += packed[i];
			expect(total).toBe(points.length);
		})
	);
});

test('a cell is drawn where its readings are', () => {
	fc.assert(
		fc.property(fc.double({ min: 30, max: 220, noNaN: true }), fc.double({ min: -100, max: 220, noNaN: true }), (x, y) => {
			const [col, row] = packCells(hexCells([x], [y], lattice));
			expect(Math.abs((col + (row & 1 ? 0.5 : 0)) * lattice.cellX - x)).toBeLessThanOrEqual(lattice.cellX / 2 + 1e-9);
			expect(Math.abs(row * lattice.rowY - y)).toBeLessThanOrEqual(lattice.rowY / 2 + 1e-9);
		})
	);
});

test('the fullest cell takes the darkest step and a single reading the lightest', () => {
	expect(densityStep(1, 1000)).toBe(0);
	expect(densityStep(1000, 1000)).toBe(5);
});

test('readings without a value leave no mark', () => {
	expect(packCells(hexCells([NaN, 100], [100, NaN], lattice))).toEqual([]);
	expect(hexPaths([], lattice, (v) => v, (v) => v)).toEqual({ paths: ['', '', '', '', '', ''], fullest: 0 });
});

/* Writes small CGNS files with the standard's reference library, for the reader's tests: write KIND FILE.
 * The surface is the unit square in the plane z = 0 with N x N cells; tau = (1 + x, 2 - y, 0), p = 10 x + y. */
#include <cgnslib.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#ifndef CELLS
#define CELLS 4
#endif
enum { N = CELLS, V = (N + 1) * (N + 1), C = N * N };

static double x[2 * V], y[2 * V], z[2 * V];

static void check(int code) {
	if (code) {
		cg_error_print();
		exit(1);
	}
}

static void grid(void) {
	for (int k = 0; k < 2; k++)
		for (int j = 0; j <= N; j++)
			for (int i = 0; i <= N; i++) {
				int v = k * V + j * (N + 1) + i;
				x[v] = (double)i / N;
				y[v] = (double)j / N;
				z[v] = k;
			}
}

static void coordinates(int f, int b, int zone) {
	int c;
	check(cg_coord_write(f, b, zone, CGNS_ENUMV(RealDouble), "CoordinateX", x, &c));
	check(cg_coord_write(f, b, zone, CGNS_ENUMV(RealDouble), "CoordinateY", y, &c));
	check(cg_coord_write(f, b, zone, CGNS_ENUMV(RealDouble), "CoordinateZ", z, &c));
}

/* solution writes tau and p at the vertices, or at the cells' middles in the order of the cells. */
static void solution(int f, int b, int zone, int cells, const char *prefix, const char *p) {
	static double t[3][V], q[V];
	int n = cells ? C : V, s, id;
	for (int i = 0; i < n; i++) {
		double px = cells ? (i % N + 0.5) / N : x[i], py = cells ? (i / N + 0.5) / N : y[i];
		t[0][i] = 1 + px;
		t[1][i] = 2 - py;
		t[2][i] = 0;
		q[i] = 10 * px + py;
	}
	check(cg_sol_write(f, b, zone, "Wall", cells ? CGNS_ENUMV(CellCenter) : CGNS_ENUMV(Vertex), &s));
	for (int k = 0; k < 3; k++) {
		char name[40];
		snprintf(name, sizeof name, "%s%c", prefix, "XYZ"[k]);
		check(cg_field_write(f, b, zone, s, CGNS_ENUMV(RealDouble), name, t[k], &id));
	}
	if (p)
		check(cg_field_write(f, b, zone, s, CGNS_ENUMV(RealDouble), p, q, &id));
}

static cgsize_t corner(int i, int j) { return j * (N + 1) + i + 1; }

/* quads fills the corners of all cells. */
static void quads(cgsize_t *e) {
	for (int j = 0; j < N; j++)
		for (int i = 0; i < N; i++, e += 4) {
			e[0] = corner(i, j);
			e[1] = corner(i + 1, j);
			e[2] = corner(i + 1, j + 1);
			e[3] = corner(i, j + 1);
		}
}

int main(int argc, char **argv) {
	if (argc != 3)
		return 2;
	const char *kind = argv[1];
	int f, b, zone, s, cell = strcmp(kind, "volume") == 0 ? 3 : 2;
	static cgsize_t e[8 * C + 8], offsets[2 * C + 1];
	grid();
	check(cg_set_file_type(CG_FILE_HDF5));
	check(cg_open(argv[2], CG_MODE_WRITE, &f));
	check(cg_base_write(f, "Base", cell, 3, &b));
	check(cg_goto(f, b, "end"));
	check(cg_dataclass_write(CGNS_ENUMV(Dimensional)));
	check(cg_units_write(CGNS_ENUMV(Kilogram), strcmp(kind, "feet") == 0 ? CGNS_ENUMV(Foot) : CGNS_ENUMV(Meter),
		CGNS_ENUMV(Second), CGNS_ENUMV(Kelvin), CGNS_ENUMV(Degree)));
	if (strcmp(kind, "structured") == 0) {
		cgsize_t size[6] = {N + 1, N + 1, N, N, 0, 0};
		check(cg_zone_write(f, b, "patch", size, CGNS_ENUMV(Structured), &zone));
		coordinates(f, b, zone);
		solution(f, b, zone, 1, "SkinFriction", "Pressure");
	} else if (strcmp(kind, "volume") == 0) {
		/* One layer of hexahedra; the wall is the layer's lower side, with data on its faces in reversed order. */
		cgsize_t size[3] = {2 * V, C, 0};
		static cgsize_t list[C];
		static double t[3][C];
		check(cg_zone_write(f, b, "air", size, CGNS_ENUMV(Unstructured), &zone));
		coordinates(f, b, zone);
		static cgsize_t flat[4 * C];
		quads(flat);
		for (int i = 0; i < C; i++)
			for (int k = 0; k < 4; k++) {
				e[8 * i + k] = flat[4 * i + k];
				e[8 * i + 4 + k] = flat[4 * i + k] + V;
			}
		check(cg_section_write(f, b, zone, "hexahedra", CGNS_ENUMV(HEXA_8), 1, C, 0, e, &s));
		check(cg_section_write(f, b, zone, "wall", CGNS_ENUMV(QUAD_4), C + 1, 2 * C, 0, flat, &s));
		for (int i = 0; i < C; i++) {
			int n = C - 1 - i; /* the list runs backward */
			list[i] = C + 1 + n;
			t[0][i] = 1 + (n % N + 0.5) / N;
			t[1][i] = 2 - (n / N + 0.5) / N;
			t[2][i] = 0;
		}
		int bc, set;
		check(cg_boco_write(f, b, zone, "floor", CGNS_ENUMV(BCWallViscous), CGNS_ENUMV(PointList), C, list, &bc));
		check(cg_boco_gridlocation_write(f, b, zone, bc, CGNS_ENUMV(FaceCenter)));
		check(cg_dataset_write(f, b, zone, bc, "shear", CGNS_ENUMV(BCWallViscous), &set));
		check(cg_bcdata_write(f, b, zone, bc, set, CGNS_ENUMV(Neumann)));
		check(cg_goto(f, b, "Zone_t", zone, "ZoneBC_t", 1, "BC_t", bc, "BCDataSet_t", set, "end"));
		check(cg_gridlocation_write(CGNS_ENUMV(FaceCenter)));
		check(cg_goto(f, b, "Zone_t", zone, "ZoneBC_t", 1, "BC_t", bc, "BCDataSet_t", set, "BCData_t", CGNS_ENUMV(Neumann), "end"));
		cgsize_t n = C;
		check(cg_array_write("SkinFrictionX", CGNS_ENUMV(RealDouble), 1, &n, t[0]));
		check(cg_array_write("SkinFrictionY", CGNS_ENUMV(RealDouble), 1, &n, t[1]));
		check(cg_array_write("SkinFrictionZ", CGNS_ENUMV(RealDouble), 1, &n, t[2]));
	} else {
		cgsize_t size[3] = {V, C, 0};
		int triangles = strcmp(kind, "triangles") == 0;
		if (triangles)
			size[1] = 2 * C;
		check(cg_zone_write(f, b, "patch", size, CGNS_ENUMV(Unstructured), &zone));
		coordinates(f, b, zone);
		quads(e);
		if (triangles) {
			static cgsize_t t[6 * C];
			for (int i = 0; i < C; i++) {
				cgsize_t pair[6] = {e[4 * i], e[4 * i + 1], e[4 * i + 2], e[4 * i], e[4 * i + 2], e[4 * i + 3]};
				memcpy(t + 6 * i, pair, sizeof pair);
			}
			check(cg_section_write(f, b, zone, "faces", CGNS_ENUMV(TRI_3), 1, 2 * C, 0, t, &s));
			solution(f, b, zone, 0, "WallShearStress", "Pressure");
		} else if (strcmp(kind, "mixed") == 0) {
			static cgsize_t m[5 * C];
			for (int i = 0; i < C; i++) {
				m[5 * i] = CGNS_ENUMV(QUAD_4);
				memcpy(m + 5 * i + 1, e + 4 * i, 4 * sizeof *e);
				offsets[i] = 5 * i;
			}
			offsets[C] = 5 * C;
			check(cg_poly_section_write(f, b, zone, "faces", CGNS_ENUMV(MIXED), 1, C, 0, m, offsets, &s));
			solution(f, b, zone, 1, "SkinFriction", "Pressure");
		} else if (strcmp(kind, "polygons") == 0) {
			for (int i = 0; i <= C; i++)
				offsets[i] = 4 * i;
			check(cg_poly_section_write(f, b, zone, "faces", CGNS_ENUMV(NGON_n), 1, C, 0, e, offsets, &s));
			solution(f, b, zone, 0, "CoefSkinFriction", "CoefPressure");
		} else { /* quads, feet, steps, many: a section in two halves, written in the wrong order */
			check(cg_section_write(f, b, zone, "upper", CGNS_ENUMV(QUAD_4), C / 2 + 1, C, 0, e + 2 * C, &s));
			check(cg_section_write(f, b, zone, "lower", CGNS_ENUMV(QUAD_4), 1, C / 2, 0, e, &s));
			solution(f, b, zone, 1, "SkinFriction", "Pressure");
			if (strcmp(kind, "steps") == 0)
				check(cg_biter_write(f, b, "TimeIterValues", 3));
			for (int i = 0; strcmp(kind, "many") == 0 && i < 300; i++) { /* so many nodes that their links go into a heap */
				char name[32];
				snprintf(name, sizeof name, "remark%03d", i);
				check(cg_goto(f, b, "Zone_t", zone, "end"));
				check(cg_descriptor_write(name, "one of many"));
			}
		}
	}
	check(cg_close(f));
	return 0;
}

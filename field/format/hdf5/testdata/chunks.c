/* Writes chunked data sets with the newest of the format's versions, for the reader's tests: chunks NAME FILE, where NAME
 * is that of one set, or "all". Element i of a set, counted through all dimensions, is i - 100; sets called "half.." are
 * written in the first half of their rows only. */
#include <hdf5.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define CHECK(x) do { if ((x) < 0) { fprintf(stderr, "%s fails\n", #x); exit(1); } } while (0)

typedef struct {
	const char *name;
	hsize_t rows, columns, chunk_rows, chunk_columns, most_rows, most_columns; /* most: 0 for no more */
	const char *filters; /* in their order: s shuffle, d deflate, f Fletcher's checksum */
	int early, edges;    /* space taken early; chunks at the edge left unpacked */
} set;

#define ANY H5S_UNLIMITED
static const set sets[] = {
	{"implicit", 37, 23, 8, 5, 0, 0, "", 1, 0},
	{"fixed", 37, 23, 8, 5, 0, 0, "", 0, 0},
	{"fixed with room", 37, 23, 8, 5, 90, 60, "", 0, 0},
	{"fixed, packed", 37, 23, 8, 5, 0, 0, "sdf", 0, 0},
	{"fixed, checksum first", 37, 23, 8, 5, 0, 0, "fd", 0, 0},
	{"fixed, edges left", 37, 23, 8, 5, 0, 0, "sd", 0, 1},
	{"fixed, pages", 60, 60, 1, 1, 0, 0, "", 0, 0},
	{"fixed, pages, packed", 60, 60, 1, 1, 0, 0, "d", 0, 0},
	{"half fixed, pages", 60, 60, 1, 1, 0, 0, "", 0, 0},
	{"extensible rows", 37, 23, 8, 5, ANY, 0, "", 0, 0},
	{"extensible columns", 37, 23, 8, 5, 0, ANY, "", 0, 0},
	{"extensible columns with room", 37, 23, 8, 5, 90, ANY, "sd", 0, 0},
	{"extensible, many", 20, 40, 1, 2, 0, ANY, "d", 0, 0},
	{"extensible, pages", 150000, 1, 1, 1, ANY, 0, "", 0, 0},
	{"half extensible", 300000, 1, 1, 1, ANY, 0, "", 0, 0},
	{"tree", 37, 23, 8, 5, ANY, ANY, "", 0, 0},
	{"tree, deep, packed", 30, 30, 1, 1, ANY, ANY, "sdf", 0, 0},
	{"half tree", 100, 90, 3, 2, ANY, ANY, "s", 0, 0},
};

int main(int argc, char **argv) {
	hid_t access = H5Pcreate(H5P_FILE_ACCESS), file;
	if (argc != 3)
		return 2;
	CHECK(H5Pset_libver_bounds(access, H5F_LIBVER_LATEST, H5F_LIBVER_LATEST));
	CHECK(file = H5Fcreate(argv[2], H5F_ACC_TRUNC, H5P_DEFAULT, access));
	for (size_t k = 0; k < sizeof sets / sizeof *sets; k++) {
		const set *s = sets + k;
		if (strcmp(argv[1], "all") && strcmp(argv[1], s->name))
			continue;
		hsize_t dims[2] = {s->rows, s->columns}, chunk[2] = {s->chunk_rows, s->chunk_columns}, from[2] = {0, 0};
		hsize_t most[2] = {s->most_rows ? s->most_rows : s->rows, s->most_columns ? s->most_columns : s->columns};
		hsize_t part[2] = {strncmp(s->name, "half", 4) ? s->rows : s->rows / 2, s->columns};
		double *data = malloc(sizeof *data * s->rows * s->columns);
		for (hsize_t i = 0; i < s->rows * s->columns; i++)
			data[i] = (double)i - 100;
		hid_t plist = H5Pcreate(H5P_DATASET_CREATE), space, memory, d;
		CHECK(H5Pset_chunk(plist, 2, chunk));
		for (const char *f = s->filters; *f; f++)
			CHECK(*f == 's' ? H5Pset_shuffle(plist) : *f == 'd' ? H5Pset_deflate(plist, 6) : H5Pset_fletcher32(plist));
		if (s->early)
			CHECK(H5Pset_alloc_time(plist, H5D_ALLOC_TIME_EARLY));
		if (s->edges)
			CHECK(H5Pset_chunk_opts(plist, H5D_CHUNK_DONT_FILTER_PARTIAL_CHUNKS));
		CHECK(space = H5Screate_simple(2, dims, most));
		CHECK(d = H5Dcreate2(file, s->name, k % 2 ? H5T_IEEE_F64LE : H5T_IEEE_F64BE, space, H5P_DEFAULT, plist, H5P_DEFAULT));
		CHECK(H5Sselect_hyperslab(space, H5S_SELECT_SET, from, NULL, part, NULL));
		CHECK(memory = H5Screate_simple(2, part, NULL));
		CHECK(H5Dwrite(d, H5T_NATIVE_DOUBLE, memory, space, H5P_DEFAULT, data));
		CHECK(H5Dclose(d));
		free(data);
	}
	CHECK(H5Fclose(file));
	return 0;
}

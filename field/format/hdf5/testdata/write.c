/* Writes small HDF5 files with the format's reference library, for the reader's tests: write VERSION FILE, where VERSION
 * is old (superblock 0, symbol tables), v18 or latest. */
#include <hdf5.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define CHECK(x) do { if ((x) < 0) { fprintf(stderr, "%s fails\n", #x); exit(1); } } while (0)

enum { ROWS = 37, COLUMNS = 23 };

static void dataset(hid_t at, const char *name, hid_t stored, hid_t plist, const double *data) {
	hsize_t dims[2] = {ROWS, COLUMNS};
	hid_t space = H5Screate_simple(2, dims, NULL), set;
	CHECK(set = H5Dcreate2(at, name, stored, space, H5P_DEFAULT, plist, H5P_DEFAULT));
	CHECK(H5Dwrite(set, H5T_NATIVE_DOUBLE, H5S_ALL, H5S_ALL, H5P_DEFAULT, data));
	H5Dclose(set);
	H5Sclose(space);
}

int main(int argc, char **argv) {
	double data[ROWS * COLUMNS];
	hsize_t chunk[2] = {8, 5}, whole[2] = {ROWS, COLUMNS}, three = 3;
	if (argc != 3)
		return 2;
	for (int i = 0; i < ROWS * COLUMNS; i++)
		data[i] = i - 100;
	hid_t access = H5Pcreate(H5P_FILE_ACCESS), file, group, plist, space, attr, text;
	if (strcmp(argv[1], "v18") == 0)
		CHECK(H5Pset_libver_bounds(access, H5F_LIBVER_V18, H5F_LIBVER_V18));
	if (strcmp(argv[1], "latest") == 0)
		CHECK(H5Pset_libver_bounds(access, H5F_LIBVER_LATEST, H5F_LIBVER_LATEST));
	CHECK(file = H5Fcreate(argv[2], H5F_ACC_TRUNC, H5P_DEFAULT, access));
	CHECK(group = H5Gcreate2(file, "sets", H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));

	dataset(group, "contiguous", H5T_IEEE_F64LE, H5P_DEFAULT, data);
	dataset(group, "big-endian", H5T_IEEE_F32BE, H5P_DEFAULT, data);
	dataset(group, "integers", H5T_STD_I16BE, H5P_DEFAULT, data);
	dataset(group, "long-integers", H5T_STD_I64LE, H5P_DEFAULT, data);
	plist = H5Pcreate(H5P_DATASET_CREATE);
	CHECK(H5Pset_layout(plist, H5D_COMPACT));
	dataset(group, "compact", H5T_IEEE_F64LE, plist, data);
	plist = H5Pcreate(H5P_DATASET_CREATE);
	CHECK(H5Pset_chunk(plist, 2, whole));
	dataset(group, "one-chunk", H5T_IEEE_F64LE, plist, data);
	CHECK(H5Pset_deflate(plist, 6));
	dataset(group, "one-packed-chunk", H5T_IEEE_F64LE, plist, data);
	plist = H5Pcreate(H5P_DATASET_CREATE);
	CHECK(H5Pset_chunk(plist, 2, chunk));
	dataset(group, "chunks", H5T_IEEE_F64LE, plist, data);
	CHECK(H5Pset_shuffle(plist));
	CHECK(H5Pset_deflate(plist, 6));
	CHECK(H5Pset_fletcher32(plist));
	dataset(group, "packed-chunks", H5T_IEEE_F64BE, plist, data);
	CHECK(H5Lcreate_soft("/sets/contiguous", group, "soft", H5P_DEFAULT, H5P_DEFAULT));

	/* Attributes: text, numbers, and so many of them that newer files store them in a heap. */
	text = H5Tcopy(H5T_C_S1);
	CHECK(H5Tset_size(text, 33));
	space = H5Screate(H5S_SCALAR);
	char word[33] = "a word";
	CHECK(attr = H5Acreate2(group, "label", text, space, H5P_DEFAULT, H5P_DEFAULT));
	CHECK(H5Awrite(attr, text, word));
	space = H5Screate_simple(1, &three, NULL);
	CHECK(attr = H5Acreate2(group, "numbers", H5T_STD_I32BE, space, H5P_DEFAULT, H5P_DEFAULT));
	int numbers[3] = {7, -8, 9};
	CHECK(H5Awrite(attr, H5T_NATIVE_INT, numbers));
	for (int i = 0; i < 20; i++) {
		char name[32];
		snprintf(name, sizeof name, "number%02d", i);
		CHECK(attr = H5Acreate2(group, name, H5T_STD_I32LE, H5Screate(H5S_SCALAR), H5P_DEFAULT, H5P_DEFAULT));
		CHECK(H5Awrite(attr, H5T_NATIVE_INT, &i));
	}
	/* Many links: symbol nodes on several levels, or a heap with an index. */
	CHECK(group = H5Gcreate2(file, "many", H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));
	for (int i = 0; i < 2000; i++) {
		char name[64];
		snprintf(name, sizeof name, "a child with a rather long name, number %04d", i);
		CHECK(H5Gcreate2(group, name, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));
	}
	CHECK(H5Fclose(file));
	return 0;
}

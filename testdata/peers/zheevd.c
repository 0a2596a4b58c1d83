/* Times LAPACK's zheevd on random Hermitian matrices, for comparison with
 * package linalg.
 *
 *   gcc -O2 -o zheevd zheevd.c -lopenblas
 *   OPENBLAS_NUM_THREADS=1 ./zheevd N V|N MILLISECONDS
 *
 * Prints one line with the nanoseconds per solve (in the fastest pass over all
 * matrices, so that other work on the machine counts little), then the
 * eigenvalues of the first matrix. Workspaces are allocated once, as a careful caller would; each
 * solve copies its matrix first, because zheevd destroys it.
 *
 * The matrices: 32 of size N, from the linear congruential generator of
 * D. E. Knuth's MMIX (x <- 6364136223846793005 x + 1442695040888963407 modulo
 * 2^64, from x = N), its upper 53 bits scaled to [-1, 1); for each row i,
 * re and im of the elements j < i, then the real diagonal element.
 */
#include <complex.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { MATRICES = 32 };

void zheevd_(const char *jobz, const char *uplo, const int *n, double complex *a, const int *lda, double *w,
             double complex *work, const int *lwork, double *rwork, const int *lrwork, int *iwork, const int *liwork,
             int *info);

static uint64_t state;

static double next(void)
{
	state = state * 6364136223846793005u + 1442695040888963407u;
	return (double)(state >> 11) / 4503599627370496.0 - 1;
}

static double now(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return t.tv_sec * 1e9 + t.tv_nsec;
}

int main(int argc, char **argv)
{
	if (argc != 4) {
		fprintf(stderr, "usage: zheevd N V|N MILLISECONDS\n");
		return 2;
	}
	int n = atoi(argv[1]);
	const char *job = argv[2];
	double limit = atof(argv[3]) * 1e6;
	size_t size = (size_t)n * n;
	double complex *all = malloc(MATRICES * size * sizeof *all), *a = malloc(size * sizeof *a);
	double *w = malloc(n * sizeof *w);

	/* Column-major: element (i, j) at i + j*n; the lower triangle is read. */
	state = n;
	memset(all, 0, MATRICES * size * sizeof *all);
	for (int k = 0; k < MATRICES; k++)
		for (int i = 0; i < n; i++) {
			for (int j = 0; j < i; j++) {
				double re = next(), im = next();
				all[k * size + i + (size_t)j * n] = re + im * I;
			}
			all[k * size + i + (size_t)i * n] = next();
		}

	int query = -1, info, liwork;
	double complex lwork_best;
	double lrwork_best;
	zheevd_(job, "L", &n, a, &n, w, &lwork_best, &query, &lrwork_best, &query, &liwork, &query, &info);
	int lwork = creal(lwork_best), lrwork = lrwork_best;
	double complex *work = malloc(lwork * sizeof *work);
	double *rwork = malloc(lrwork * sizeof *rwork);
	int *iwork = malloc(liwork * sizeof *iwork);

	double *first = malloc(n * sizeof *first), best = 1e300, begin = now(), end;
	do {
		double start = now();
		for (int k = 0; k < MATRICES; k++) {
			memcpy(a, all + k * size, size * sizeof *a);
			zheevd_(job, "L", &n, a, &n, w, work, &lwork, rwork, &lrwork, iwork, &liwork, &info);
			if (info != 0) {
				fprintf(stderr, "zheevd: info = %d\n", info);
				return 1;
			}
			if (k == 0)
				memcpy(first, w, n * sizeof *w);
		}
		end = now();
		if (end - start < best)
			best = end - start;
	} while (end - begin < limit);

	printf("%.3f\n", best / MATRICES);
	for (int i = 0; i < n; i++)
		printf("%.17g\n", first[i]);
	return 0;
}

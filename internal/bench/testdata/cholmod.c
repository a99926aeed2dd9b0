/* Factorises the five-point matrix of an n × n grid, Laplacian plus 0.01, with
 * a general sparse Cholesky library, METIS ordering and supernodes. Prints the
 * seconds of analysis, factorisation, a second factorisation and a solve. */
#include <cholmod.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double now(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(int argc, char **argv)
{
	int n = atoi(argv[1]);
	cholmod_common c;
	cholmod_start(&c);
	c.nmethods = 1;
	c.method[0].ordering = CHOLMOD_METIS;
	c.supernodal = CHOLMOD_SUPERNODAL;
	size_t N = (size_t)n * n;
	cholmod_triplet *T = cholmod_allocate_triplet(N, N, 3 * N, 1, CHOLMOD_REAL, &c);
	int *I = T->i, *J = T->j;
	double *X = T->x;
	size_t k = 0;
	for (int r = 0; r < n; r++)
		for (int s = 0; s < n; s++) {
			int i = r * n + s;
			I[k] = i, J[k] = i, X[k++] = 4.01;
			if (s + 1 < n)
				I[k] = i, J[k] = i + 1, X[k++] = -1;
			if (r + 1 < n)
				I[k] = i, J[k] = i + n, X[k++] = -1;
		}
	T->nnz = k;
	cholmod_sparse *A = cholmod_triplet_to_sparse(T, k, &c);
	cholmod_dense *b = cholmod_ones(N, 1, CHOLMOD_REAL, &c);
	double t0 = now();
	cholmod_factor *L = cholmod_analyze(A, &c);
	double t1 = now();
	cholmod_factorize(A, L, &c);
	double t2 = now();
	cholmod_dense *x = cholmod_solve(CHOLMOD_A, L, b, &c);
	double t3 = now();
	cholmod_factorize(A, L, &c);
	double t4 = now();
	if (c.status != CHOLMOD_OK || L->minor < N || !x)
		return 1;
	printf("%.6f %.6f %.6f %.6f\n", t1 - t0, t2 - t1, t4 - t3, t3 - t2);
	return 0;
}

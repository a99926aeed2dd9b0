/* The plain loop that a physicist would write: leapfrog on a line with free
 * ends, unit coefficients, nearest neighbours. Prints ns of
 * processor time per site and step. */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#ifdef SINE
#define SLOPE(p) sin(p)
#else
#define SLOPE(p) ((p) * ((p) * (p) - 1))
#endif

int main(int argc, char **argv)
{
	int n = argc > 1 ? atoi(argv[1]) : 4096;
	long steps = argc > 2 ? atol(argv[2]) : 10000;
	double h = 0.1, k = 0.05, r = k * k / (h * h), kk = k * k;
	double *now = malloc(n * sizeof *now), *before = malloc(n * sizeof *before), *next = malloc(n * sizeof *next);
	for (int i = 0; i < n; i++)
		now[i] = before[i] = tanh(0.1 * (i - n / 2) * 0.7071);
	struct timespec a, b;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &a);
	for (long s = 0; s < steps; s++) {
		next[0] = 2 * now[0] - before[0] + 2 * r * (now[1] - now[0]) - kk * SLOPE(now[0]);
		for (int i = 1; i < n - 1; i++)
			next[i] = 2 * now[i] - before[i] + r * (now[i + 1] - 2 * now[i] + now[i - 1]) - kk * SLOPE(now[i]);
		next[n - 1] = 2 * now[n - 1] - before[n - 1] + 2 * r * (now[n - 2] - now[n - 1]) - kk * SLOPE(now[n - 1]);
		double *t = before;
		before = now, now = next, next = t;
	}
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &b);
	double ns = (b.tv_sec - a.tv_sec) * 1e9 + (b.tv_nsec - a.tv_nsec);
	printf("%.6f %.17g\n", ns / ((double)n * steps), now[n / 3]);
	return 0;
}

/* Times the Fermi-Dirac integrals of the GNU Scientific Library, and Newton steps on them, on doubles from a file.
 *
 *     gsl_fermi_dirac WORK FILE     WORK: an order as twice j, or "inverse" followed by one
 *
 * Writes nanoseconds a value, best of a few rounds, to standard output, and the results over FILE.
 */

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include <gsl/gsl_errno.h>
#include <gsl/gsl_sf_fermi_dirac.h>

typedef double (*function)(double);

static function integral(int twice_order)
{
    switch (twice_order) {
    case -2: return gsl_sf_fermi_dirac_m1;
    case -1: return gsl_sf_fermi_dirac_mhalf;
    case 0: return gsl_sf_fermi_dirac_0;
    case 1: return gsl_sf_fermi_dirac_half;
    case 2: return gsl_sf_fermi_dirac_1;
    case 3: return gsl_sf_fermi_dirac_3half;
    case 4: return gsl_sf_fermi_dirac_2;
    default: fprintf(stderr, "no such order\n"); exit(1);
    }
}

/* N. G. Nilsson, Phys. Status Solidi A 19, K75 (1973), eq. (6): eta of F_1/2 to 0.6 %. */
static double nilsson(double u)
{
    double nu = pow(0.75 * sqrt(M_PI) * u, 2.0 / 3.0), bend = 0.24 + 1.08 * nu;
    double classical = fabs(u - 1.0) < 1e-6 ? -0.5 : log(u) / (1.0 - u * u);
    return classical + nu / (1.0 + 1.0 / (bend * bend));
}

static double guess(int twice_order, double u)
{
    if (twice_order == 1) return nilsson(u);
    if (twice_order == 0) return u > 1.0 ? u : log(u);
    return u > 1.2 ? 0.25 * M_PI * u * u : log(u / (1.0 - 0.6 * u));
}

/* Steps of Newton, to 1e-14; of the secant for order -1/2, of which the library has no derivative. */
static double inverse(int twice_order, double u)
{
    function value = integral(twice_order);
    double eta = guess(twice_order, u), step, before = 0.0, difference = 0.0;
    for (int round = 0; round < 60; round++) {
        double excess = value(eta) - u, slope;
        if (twice_order >= 0)
            slope = integral(twice_order - 2)(eta);
        else
            slope = round ? (excess - before) / difference : 0.6 * u / (1.0 + u * u);
        before = excess;
        if (slope == 0.0) break;
        step = -excess / slope;
        difference = (eta + step) - eta;
        eta += step;
        if (difference == 0.0 || fabs(step) <= 1e-14 * fmax(1.0, fabs(eta))) break;
    }
    return eta;
}

static double now(void)
{
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return 1e9 * time.tv_sec + time.tv_nsec;
}

int main(int count, char **arguments)
{
    if (count < 3) return 1;
    int inverted = strncmp(arguments[1], "inverse", 7) == 0;
    int twice_order = atoi(arguments[1] + (inverted ? 7 : 0));
    gsl_set_error_handler_off(); /* it reports an underflow where the result is below the smallest double */

    FILE *file = fopen(arguments[2], "rb+");
    if (!file) return 1;
    fseek(file, 0, SEEK_END);
    long size = ftell(file) / (long)sizeof(double);
    rewind(file);
    double *in = malloc(size * sizeof(double)), *out = malloc(size * sizeof(double)), best = INFINITY;
    if (!in || !out || fread(in, sizeof(double), size, file) != (size_t)size) return 1;
    function value = inverted ? NULL : integral(twice_order);
    for (int round = 0; round < 3; round++) {
        double begin = now();
        for (long i = 0; i < size; i++) out[i] = inverted ? inverse(twice_order, in[i]) : value(in[i]);
        best = fmin(best, (now() - begin) / size);
    }
    rewind(file);
    fwrite(out, sizeof(double), size, file);
    fclose(file);
    printf("%.3f\n", best);
    return 0;
}

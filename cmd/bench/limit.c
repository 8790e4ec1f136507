//go:build ignore

/*
 * The job in C with FFTW: window, transform and one-sided cross-spectral densities of blocks that
 * overlap by half, by one thread a core.
 *
 * Sizes are constants (FORCES, RESPONSES, BLOCK, LINES, CHANNELS, GROUP), so that the compiler can
 * unroll its loops. Sums of (line, channel, force) hold Gxx in their first FORCES channels and Gyx in
 * the others.
 *
 * The first line keeps Go's tools from taking this file for a part of the package.
 *
 * usage: limit RECORDING BLOCKS THREADS frames|channels lines|channels TOGETHER
 *
 * Then, on standard input: a number does the job as often and answers "done"; "write" answers with
 * Gxx, Gyx and Gyy as raw doubles.
 */
#include <fftw3.h>
#include <math.h>
#include <omp.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { Q = FORCES, C = CHANNELS, N = BLOCK, L = LINES, HOP = BLOCK / 2, TILE = 16, MOST = 16, AHEAD = 32 };

/* Lengths of rows of samples and of lines: no power of two, which would crowd a part of the caches. */
enum { ROW = BLOCK + 8, BINS = (BLOCK / 2 + 1 + 3) / 4 * 4 };

static const double rate_hz = 48000;

static double window[N], *recording; /* (frame, channel) */
static double *sums, *powers;        /* (line, channel, force, 2), (line, channel) */
static fftw_complex *transformed[MOST];
static size_t line_stride, channel_stride; /* of transformed */
static double *windowed;                   /* a group of channels for each thread */
static int by_frame;                       /* windowed is (frame, channel), else (channel, frame) */
static fftw_plan plan;

static void *room(size_t doubles)
{
    void *p = fftw_malloc(doubles * sizeof(double));
    if (!p) {
        fprintf(stderr, "out of memory\n");
        exit(1);
    }
    return memset(p, 0, doubles * sizeof(double));
}

static void transform(const double *block, fftw_complex *to, int first)
{
    double *w = windowed + (size_t)omp_get_thread_num() * GROUP * ROW;
    for (int n = 0; n < N; n++) {
        const double *frame = block + (size_t)n * C + first;
        __builtin_prefetch(frame + AHEAD * C); /* the processor does not foresee such strides by itself */
        if (by_frame)
            for (int c = 0; c < GROUP; c++)
                w[n * GROUP + c] = window[n] * frame[c];
        else
            for (int c = 0; c < GROUP; c++)
                w[c * ROW + n] = window[n] * frame[c];
    }
    fftw_execute_dft_r2c(plan, w, to + first * channel_stride);
}

/* add adds the products of one line of some blocks, of which z[b] are all channels. */
static void add(int k, fftw_complex *const *z, int blocks)
{
    double xa[MOST][2 * Q], xb[MOST][2 * Q];
    for (int b = 0; b < blocks; b++)
        for (int i = 0; i < Q; i++) {
            xa[b][2 * i] = xb[b][2 * i + 1] = z[b][i][0];
            xa[b][2 * i + 1] = -(xb[b][2 * i] = z[b][i][1]);
        }
    for (int c = 0; c < C; c++) {
        double *to = sums + ((size_t)k * C + c) * 2 * Q, g[2 * Q], power = 0;
        memcpy(g, to, sizeof g);
        for (int b = 0; b < blocks; b++) {
            double re = z[b][c][0], im = z[b][c][1];
            for (int j = 0; j < 2 * Q; j++)
                g[j] += re * xa[b][j] + im * xb[b][j];
            power += re * re + im * im;
        }
        memcpy(to, g, sizeof g);
        powers[(size_t)k * C + c] += power;
    }
}

/* add_tile adds up to TILE lines from line k on, turned first where they lie channel by channel. */
static void add_tile(int k, int blocks)
{
    static _Thread_local fftw_complex tile[MOST][TILE][C];
    int lines = L - k < TILE ? L - k : TILE;
    if (channel_stride != 1)
        for (int b = 0; b < blocks; b++)
            for (int c = 0; c < C; c++)
                for (int t = 0; t < lines; t++)
                    memcpy(tile[b][t][c], transformed[b][c * channel_stride + k + t], sizeof(fftw_complex));
    for (int t = 0; t < lines; t++) {
        fftw_complex *z[MOST];
        for (int b = 0; b < blocks; b++)
            z[b] = channel_stride == 1 ? transformed[b] + (k + t) * line_stride : tile[b][t];
        add(k + t, z, blocks);
    }
}

static void job(int blocks, int together)
{
    double energy = 0;
    for (int n = 0; n < N; n++)
        energy += window[n] * window[n];
#pragma omp parallel
    {
#pragma omp for
        for (int k = 0; k < L; k++) {
            memset(sums + (size_t)k * C * 2 * Q, 0, C * 2 * Q * sizeof(double));
            memset(powers + (size_t)k * C, 0, C * sizeof(double));
        }
        for (int first = 0; first < blocks; first += together) {
            int some = blocks - first < together ? blocks - first : together;
#pragma omp for collapse(2) schedule(dynamic)
            for (int b = 0; b < some; b++)
                for (int c = 0; c < C; c += GROUP)
                    transform(recording + (size_t)(first + b) * HOP * C, transformed[b], c);
#pragma omp for schedule(dynamic)
            for (int k = 0; k < L; k += TILE)
                add_tile(k, some);
        }
#pragma omp for
        for (int k = 0; k < L; k++) {
            double scale = (k ? 2 : 1) / (rate_hz * energy * blocks);
            for (size_t n = (size_t)k * C * 2 * Q; n < (size_t)(k + 1) * C * 2 * Q; n++)
                sums[n] *= scale;
            for (size_t n = (size_t)k * C; n < (size_t)(k + 1) * C; n++)
                powers[n] *= scale;
        }
    }
}

static void write_all(void)
{
    for (int k = 0; k < L; k++)
        fwrite(sums + (size_t)k * C * 2 * Q, sizeof(double), 2 * Q * Q, stdout);
    for (int k = 0; k < L; k++)
        fwrite(sums + ((size_t)k * C + Q) * 2 * Q, sizeof(double), (size_t)(C - Q) * 2 * Q, stdout);
    for (int k = 0; k < L; k++)
        fwrite(powers + (size_t)k * C + Q, sizeof(double), C - Q, stdout);
}

static void prepare(const char *path, int blocks, const char *in, const char *out, int together)
{
    size_t samples = ((size_t)blocks * HOP + HOP) * C;
    int n = N;
    int by_line = !strcmp(out, "lines");
    FILE *f = fopen(path, "rb");
    recording = room(samples);
    if (!f || fread(recording, sizeof(double), samples, f) != samples) {
        fprintf(stderr, "%s: not as long as it should be\n", path);
        exit(1);
    }
    fclose(f);
    for (int k = 0; k < N; k++)
        window[k] = 0.5 - 0.5 * cos(2 * M_PI * k / N);
    sums = room((size_t)L * C * 2 * Q);
    powers = room((size_t)L * C);
    windowed = room((size_t)omp_get_max_threads() * GROUP * ROW);
    for (int b = 0; b < together; b++)
        transformed[b] = room((size_t)BINS * C * 2);
    by_frame = !strcmp(in, "frames");
    line_stride = by_line ? C : 1;
    channel_stride = by_line ? 1 : BINS;
    plan = fftw_plan_many_dft_r2c(1, &n, GROUP, windowed, NULL, by_frame ? GROUP : 1, by_frame ? 1 : ROW,
                                  transformed[0], NULL, line_stride, channel_stride, FFTW_MEASURE);
}

int main(int argc, char **argv)
{
    char word[32];
    if (argc != 7 || atoi(argv[6]) < 1 || atoi(argv[6]) > MOST) {
        fprintf(stderr, "usage: limit RECORDING BLOCKS THREADS frames|channels lines|channels TOGETHER\n");
        return 2;
    }
    int blocks = atoi(argv[2]), together = atoi(argv[6]);
    omp_set_num_threads(atoi(argv[3]));
    prepare(argv[1], blocks, argv[4], argv[5], together);
    printf("C: %s, gcc %s, %d threads\n", fftw_version, __VERSION__, omp_get_max_threads());
    while (fflush(stdout), scanf("%31s", word) == 1) {
        if (!strcmp(word, "write")) {
            write_all();
            continue;
        }
        for (int n = atoi(word); n > 0; n--)
            job(blocks, together);
        puts("done");
    }
    return 0;
}

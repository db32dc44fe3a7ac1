/* The models of the NIST StRD problems with their derivatives: by hand in double precision, and once more in complex
 * arithmetic, so that the complex step (Squire and Trapp, SIAM Rev. 40, 110 (1998)) can check the first against the second. */
#ifndef NIST_MODELS_H
#define NIST_MODELS_H

#include <complex.h>
#include <math.h>

typedef double complex C;
typedef struct
{
  const char *name;
  double (*value) (const double *b, const double *x, double *d); /* fills @d with the derivatives */
  C (*complex_value) (const C *b, const double *x);
  int amplitude; /* b1 stands in front of everything else: it is the function's amplitude */
} Nist;

static double
saturation (const double *b, const double *x, double *d)
{
  const double e = exp (-b[1] * x[0]);

  d[0] = -expm1 (-b[1] * x[0]);
  d[1] = b[0] * x[0] * e;
  return b[0] * d[0];
}

static C
saturation_c (const C *b, const double *x)
{
  return b[0] * (1 - cexp (-b[1] * x[0]));
}

static double
misra1b (const double *b, const double *x, double *d)
{
  const double u = 1 + b[1] * x[0] / 2;

  d[0] = 1 - 1 / (u * u);
  d[1] = b[0] * x[0] / (u * u * u);
  return b[0] * d[0];
}

static C
misra1b_c (const C *b, const double *x)
{
  C u = 1 + b[1] * x[0] / 2;

  return b[0] * (1 - 1 / (u * u));
}

static double
misra1c (const double *b, const double *x, double *d)
{
  const double u = 1 + 2 * b[1] * x[0], s = 1 / sqrt (u);

  d[0] = 1 - s;
  d[1] = b[0] * x[0] * s / u;
  return b[0] * d[0];
}

static C
misra1c_c (const C *b, const double *x)
{
  return b[0] * (1 - 1 / csqrt (1 + 2 * b[1] * x[0]));
}

static double
misra1d (const double *b, const double *x, double *d)
{
  const double u = 1 / (1 + b[1] * x[0]);

  d[0] = b[1] * x[0] * u;
  d[1] = b[0] * x[0] * u * u;
  return b[0] * d[0];
}

static C
misra1d_c (const C *b, const double *x)
{
  return b[0] * b[1] * x[0] / (1 + b[1] * x[0]);
}

static double
chwirut (const double *b, const double *x, double *d)
{
  const double u = 1 / (b[1] + b[2] * x[0]), f = exp (-b[0] * x[0]) * u;

  d[0] = -x[0] * f;
  d[1] = -f * u;
  d[2] = -f * u * x[0];
  return f;
}

static C
chwirut_c (const C *b, const double *x)
{
  return cexp (-b[0] * x[0]) / (b[1] + b[2] * x[0]);
}

static double
lanczos (const double *b, const double *x, double *d)
{
  double f = 0;

  for (int k = 0; k < 6; k += 2)
    {
      d[k] = exp (-b[k + 1] * x[0]);
      d[k + 1] = -x[0] * b[k] * d[k];
      f += b[k] * d[k];
    }
  return f;
}

static C
lanczos_c (const C *b, const double *x)
{
  return b[0] * cexp (-b[1] * x[0]) + b[2] * cexp (-b[3] * x[0]) + b[4] * cexp (-b[5] * x[0]);
}

static double
gauss (const double *b, const double *x, double *d)
{
  double f;

  d[0] = exp (-b[1] * x[0]);
  d[1] = -x[0] * b[0] * d[0];
  f = b[0] * d[0];
  for (int k = 2; k < 8; k += 3)
    {
      const double z = (x[0] - b[k + 1]) / b[k + 2];

      d[k] = exp (-z * z);
      d[k + 1] = b[k] * d[k] * 2 * z / b[k + 2];
      d[k + 2] = d[k + 1] * z;
      f += b[k] * d[k];
    }
  return f;
}

static C
gauss_c (const C *b, const double *x)
{
  C u = (x[0] - b[3]) / b[4], v = (x[0] - b[6]) / b[7];

  return b[0] * cexp (-b[1] * x[0]) + b[2] * cexp (-u * u) + b[5] * cexp (-v * v);
}

static double
danwood (const double *b, const double *x, double *d)
{
  d[0] = pow (x[0], b[1]);
  d[1] = b[0] * d[0] * log (x[0]);
  return b[0] * d[0];
}

static C
danwood_c (const C *b, const double *x)
{
  return b[0] * cpow (x[0], b[1]);
}

/* Polynomial of degree @top over 1 + polynomial of degree @top. */
static double
ratio (int top, const double *b, double x, double *d)
{
  double above = b[top], below = 0, power = 1;

  for (int k = top - 1; k >= 0; k--)
    above = above * x + b[k];
  for (int k = top; k >= 1; k--)
    below = (below + b[top + k]) * x;
  below = 1 / (1 + below);
  for (int k = 0; k <= top; k++, power *= x)
    {
      d[k] = power * below;
      if (k > 0)
        d[top + k] = -above * below * below * power;
    }
  return above * below;
}

static double
cubic_ratio (const double *b, const double *x, double *d)
{
  return ratio (3, b, x[0], d);
}

static C
cubic_ratio_c (const C *b, const double *x)
{
  double t = x[0];

  return (b[0] + t * (b[1] + t * (b[2] + t * b[3]))) / (1 + t * (b[4] + t * (b[5] + t * b[6])));
}

static double
kirby (const double *b, const double *x, double *d)
{
  return ratio (2, b, x[0], d);
}

static C
kirby_c (const C *b, const double *x)
{
  return (b[0] + x[0] * (b[1] + x[0] * b[2])) / (1 + x[0] * (b[3] + x[0] * b[4]));
}

static double
nelson (const double *b, const double *x, double *d)
{
  const double e = exp (-b[2] * x[1]);

  d[0] = 1;
  d[1] = -x[0] * e;
  d[2] = b[1] * x[0] * x[1] * e;
  return b[0] + b[1] * d[1];
}

static C
nelson_c (const C *b, const double *x)
{
  return b[0] - b[1] * x[0] * cexp (-b[2] * x[1]);
}

static double
mgh17 (const double *b, const double *x, double *d)
{
  d[0] = 1;
  d[1] = exp (-x[0] * b[3]);
  d[2] = exp (-x[0] * b[4]);
  d[3] = -x[0] * b[1] * d[1];
  d[4] = -x[0] * b[2] * d[2];
  return b[0] + b[1] * d[1] + b[2] * d[2];
}

static C
mgh17_c (const C *b, const double *x)
{
  return b[0] + b[1] * cexp (-x[0] * b[3]) + b[2] * cexp (-x[0] * b[4]);
}

static double
roszman (const double *b, const double *x, double *d)
{
  const double u = x[0] - b[3], v = b[2] / u, w = 1 / (G_PI * (1 + v * v));

  d[0] = 1;
  d[1] = -x[0];
  d[2] = -w / u;
  d[3] = -w * v / u;
  return b[0] - b[1] * x[0] - atan (v) / G_PI;
}

static C
roszman_c (const C *b, const double *x)
{
  return b[0] - b[1] * x[0] - catan (b[2] / (x[0] - b[3])) / G_PI;
}

static double
enso (const double *b, const double *x, double *d)
{
  const double year = 2 * G_PI * x[0] / 12, u = 2 * G_PI * x[0] / b[3], v = 2 * G_PI * x[0] / b[6];

  d[0] = 1;
  d[1] = cos (year);
  d[2] = sin (year);
  d[4] = cos (u);
  d[5] = sin (u);
  d[3] = (b[4] * d[5] - b[5] * d[4]) * u / b[3];
  d[7] = cos (v);
  d[8] = sin (v);
  d[6] = (b[7] * d[8] - b[8] * d[7]) * v / b[6];
  return b[0] + b[1] * d[1] + b[2] * d[2] + b[4] * d[4] + b[5] * d[5] + b[7] * d[7] + b[8] * d[8];
}

static C
enso_c (const C *b, const double *x)
{
  C u = 2 * G_PI * x[0] / b[3], v = 2 * G_PI * x[0] / b[6];
  double year = 2 * G_PI * x[0] / 12;

  return b[0] + b[1] * cos (year) + b[2] * sin (year) + b[4] * ccos (u) + b[5] * csin (u) + b[7] * ccos (v) + b[8] * csin (v);
}

static double
mgh09 (const double *b, const double *x, double *d)
{
  const double t = x[0], below = 1 / (t * t + t * b[2] + b[3]), f = b[0] * t * (t + b[1]) * below;

  d[0] = t * (t + b[1]) * below;
  d[1] = b[0] * t * below;
  d[2] = -f * below * t;
  d[3] = -f * below;
  return f;
}

static C
mgh09_c (const C *b, const double *x)
{
  return b[0] * (x[0] * x[0] + x[0] * b[1]) / (x[0] * x[0] + x[0] * b[2] + b[3]);
}

static double
mgh10 (const double *b, const double *x, double *d)
{
  const double u = 1 / (x[0] + b[2]);

  d[0] = exp (b[1] * u);
  d[1] = b[0] * d[0] * u;
  d[2] = -d[1] * b[1] * u;
  return b[0] * d[0];
}

static C
mgh10_c (const C *b, const double *x)
{
  return b[0] * cexp (b[1] / (x[0] + b[2]));
}

static double
rat42 (const double *b, const double *x, double *d)
{
  const double e = exp (b[1] - b[2] * x[0]);

  d[0] = 1 / (1 + e);
  d[1] = -b[0] * d[0] * (1 / (1 + 1 / e));
  d[2] = -x[0] * d[1];
  return b[0] * d[0];
}

static C
rat42_c (const C *b, const double *x)
{
  return b[0] / (1 + cexp (b[1] - b[2] * x[0]));
}

static double
rat43 (const double *b, const double *x, double *d)
{
  const double e = exp (b[1] - b[2] * x[0]), l = log1p (e);

  d[0] = exp (-l / b[3]);
  d[1] = -b[0] * d[0] / (b[3] * (1 + 1 / e));
  d[2] = -x[0] * d[1];
  d[3] = b[0] * d[0] * l / (b[3] * b[3]);
  return b[0] * d[0];
}

static C
rat43_c (const C *b, const double *x)
{
  return b[0] / cpow (1 + cexp (b[1] - b[2] * x[0]), 1 / b[3]);
}

static double
bennett (const double *b, const double *x, double *d)
{
  const double l = log (b[1] + x[0]);

  d[0] = exp (-l / b[2]);
  d[1] = -b[0] * d[0] / (b[2] * (b[1] + x[0]));
  d[2] = b[0] * d[0] * l / (b[2] * b[2]);
  return b[0] * d[0];
}

static C
bennett_c (const C *b, const double *x)
{
  return b[0] * cpow (b[1] + x[0], -1 / b[2]);
}

static double
eckerle (const double *b, const double *x, double *d)
{
  const double z = (x[0] - b[2]) / b[1], f = b[0] / b[1] * exp (-z * z / 2);

  d[0] = f / b[0];
  d[1] = f * (z * z - 1) / b[1];
  d[2] = f * z / b[1];
  return f;
}

static C
eckerle_c (const C *b, const double *x)
{
  C z = (x[0] - b[2]) / b[1];

  return b[0] / b[1] * cexp (-z * z / 2);
}

static const Nist nist_sets[] = {
  { "Bennett5", bennett, bennett_c, 1 },
  { "BoxBOD", saturation, saturation_c, 1 },
  { "Chwirut1", chwirut, chwirut_c },
  { "Chwirut2", chwirut, chwirut_c },
  { "DanWood", danwood, danwood_c, 1 },
  { "Eckerle4", eckerle, eckerle_c, 1 },
  { "ENSO", enso, enso_c },
  { "Gauss1", gauss, gauss_c },
  { "Gauss2", gauss, gauss_c },
  { "Gauss3", gauss, gauss_c },
  { "Hahn1", cubic_ratio, cubic_ratio_c },
  { "Kirby2", kirby, kirby_c },
  { "Lanczos1", lanczos, lanczos_c },
  { "Lanczos2", lanczos, lanczos_c },
  { "Lanczos3", lanczos, lanczos_c },
  { "MGH09", mgh09, mgh09_c, 1 },
  { "MGH10", mgh10, mgh10_c, 1 },
  { "MGH17", mgh17, mgh17_c },
  { "Misra1a", saturation, saturation_c, 1 },
  { "Misra1b", misra1b, misra1b_c, 1 },
  { "Misra1c", misra1c, misra1c_c, 1 },
  { "Misra1d", misra1d, misra1d_c, 1 },
  { "Nelson", nelson, nelson_c },
  { "Rat42", rat42, rat42_c, 1 },
  { "Rat43", rat43, rat43_c, 1 },
  { "Roszman1", roszman, roszman_c },
  { "Thurber", cubic_ratio, cubic_ratio_c },
};

#endif

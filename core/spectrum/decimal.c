/* Decimals of up to 19 digits to the nearest double. */
#include "text-private.h"

#include <string.h>

#ifdef __SIZEOF_INT128__

#define FIRST_POWER -64
#define LAST_POWER 64
/* log2 (5) times 65536; for powers this small the whole part of its multiples is right. */
#define LOG2_OF_5_65536 152170

/* The first 128 bits of the powers of five, upper half and lower, cut off; made and checked by tests/spectrum/powers-of-five.py. */
static const guint64 powers_of_five[][2] = {
  { 0xa87fea27a539e9a5, 0x3f2398d747b36224 }, { 0xd29fe4b18e88640e, 0x8eec7f0d19a03aad }, { 0x83a3eeeef9153e89, 0x1953cf68300424ac },
  { 0xa48ceaaab75a8e2b, 0x5fa8c3423c052dd7 }, { 0xcdb02555653131b6, 0x3792f412cb06794d }, { 0x808e17555f3ebf11, 0xe2bbd88bbee40bd0 },
  { 0xa0b19d2ab70e6ed6, 0x5b6aceaeae9d0ec4 }, { 0xc8de047564d20a8b, 0xf245825a5a445275 }, { 0xfb158592be068d2e, 0xeed6e2f0f0d56712 },
  { 0x9ced737bb6c4183d, 0x55464dd69685606b }, { 0xc428d05aa4751e4c, 0xaa97e14c3c26b886 }, { 0xf53304714d9265df, 0xd53dd99f4b3066a8 },
  { 0x993fe2c6d07b7fab, 0xe546a8038efe4029 }, { 0xbf8fdb78849a5f96, 0xde98520472bdd033 }, { 0xef73d256a5c0f77c, 0x963e66858f6d4440 },
  { 0x95a8637627989aad, 0xdde7001379a44aa8 }, { 0xbb127c53b17ec159, 0x5560c018580d5d52 }, { 0xe9d71b689dde71af, 0xaab8f01e6e10b4a6 },
  { 0x9226712162ab070d, 0xcab3961304ca70e8 }, { 0xb6b00d69bb55c8d1, 0x3d607b97c5fd0d22 }, { 0xe45c10c42a2b3b05, 0x8cb89a7db77c506a },
  { 0x8eb98a7a9a5b04e3, 0x77f3608e92adb242 }, { 0xb267ed1940f1c61c, 0x55f038b237591ed3 }, { 0xdf01e85f912e37a3, 0x6b6c46dec52f6688 },
  { 0x8b61313bbabce2c6, 0x2323ac4b3b3da015 }, { 0xae397d8aa96c1b77, 0xabec975e0a0d081a }, { 0xd9c7dced53c72255, 0x96e7bd358c904a21 },
  { 0x881cea14545c7575, 0x7e50d64177da2e54 }, { 0xaa242499697392d2, 0xdde50bd1d5d0b9e9 }, { 0xd4ad2dbfc3d07787, 0x955e4ec64b44e864 },
  { 0x84ec3c97da624ab4, 0xbd5af13bef0b113e }, { 0xa6274bbdd0fadd61, 0xecb1ad8aeacdd58e }, { 0xcfb11ead453994ba, 0x67de18eda5814af2 },
  { 0x81ceb32c4b43fcf4, 0x80eacf948770ced7 }, { 0xa2425ff75e14fc31, 0xa1258379a94d028d }, { 0xcad2f7f5359a3b3e, 0x096ee45813a04330 },
  { 0xfd87b5f28300ca0d, 0x8bca9d6e188853fc }, { 0x9e74d1b791e07e48, 0x775ea264cf55347d }, { 0xc612062576589dda, 0x95364afe032a819d },
  { 0xf79687aed3eec551, 0x3a83ddbd83f52204 }, { 0x9abe14cd44753b52, 0xc4926a9672793542 }, { 0xc16d9a0095928a27, 0x75b7053c0f178293 },
  { 0xf1c90080baf72cb1, 0x5324c68b12dd6338 }, { 0x971da05074da7bee, 0xd3f6fc16ebca5e03 }, { 0xbce5086492111aea, 0x88f4bb1ca6bcf584 },
  { 0xec1e4a7db69561a5, 0x2b31e9e3d06c32e5 }, { 0x9392ee8e921d5d07, 0x3aff322e62439fcf }, { 0xb877aa3236a4b449, 0x09befeb9fad487c2 },
  { 0xe69594bec44de15b, 0x4c2ebe687989a9b3 }, { 0x901d7cf73ab0acd9, 0x0f9d37014bf60a10 }, { 0xb424dc35095cd80f, 0x538484c19ef38c94 },
  { 0xe12e13424bb40e13, 0x2865a5f206b06fb9 }, { 0x8cbccc096f5088cb, 0xf93f87b7442e45d3 }, { 0xafebff0bcb24aafe, 0xf78f69a51539d748 },
  { 0xdbe6fecebdedd5be, 0xb573440e5a884d1b }, { 0x89705f4136b4a597, 0x31680a88f8953030 }, { 0xabcc77118461cefc, 0xfdc20d2b36ba7c3d },
  { 0xd6bf94d5e57a42bc, 0x3d32907604691b4c }, { 0x8637bd05af6c69b5, 0xa63f9a49c2c1b10f }, { 0xa7c5ac471b478423, 0x0fcf80dc33721d53 },
  { 0xd1b71758e219652b, 0xd3c36113404ea4a8 }, { 0x83126e978d4fdf3b, 0x645a1cac083126e9 }, { 0xa3d70a3d70a3d70a, 0x3d70a3d70a3d70a3 },
  { 0xcccccccccccccccc, 0xcccccccccccccccc }, { 0x8000000000000000, 0x0000000000000000 }, { 0xa000000000000000, 0x0000000000000000 },
  { 0xc800000000000000, 0x0000000000000000 }, { 0xfa00000000000000, 0x0000000000000000 }, { 0x9c40000000000000, 0x0000000000000000 },
  { 0xc350000000000000, 0x0000000000000000 }, { 0xf424000000000000, 0x0000000000000000 }, { 0x9896800000000000, 0x0000000000000000 },
  { 0xbebc200000000000, 0x0000000000000000 }, { 0xee6b280000000000, 0x0000000000000000 }, { 0x9502f90000000000, 0x0000000000000000 },
  { 0xba43b74000000000, 0x0000000000000000 }, { 0xe8d4a51000000000, 0x0000000000000000 }, { 0x9184e72a00000000, 0x0000000000000000 },
  { 0xb5e620f480000000, 0x0000000000000000 }, { 0xe35fa931a0000000, 0x0000000000000000 }, { 0x8e1bc9bf04000000, 0x0000000000000000 },
  { 0xb1a2bc2ec5000000, 0x0000000000000000 }, { 0xde0b6b3a76400000, 0x0000000000000000 }, { 0x8ac7230489e80000, 0x0000000000000000 },
  { 0xad78ebc5ac620000, 0x0000000000000000 }, { 0xd8d726b7177a8000, 0x0000000000000000 }, { 0x878678326eac9000, 0x0000000000000000 },
  { 0xa968163f0a57b400, 0x0000000000000000 }, { 0xd3c21bcecceda100, 0x0000000000000000 }, { 0x84595161401484a0, 0x0000000000000000 },
  { 0xa56fa5b99019a5c8, 0x0000000000000000 }, { 0xcecb8f27f4200f3a, 0x0000000000000000 }, { 0x813f3978f8940984, 0x4000000000000000 },
  { 0xa18f07d736b90be5, 0x5000000000000000 }, { 0xc9f2c9cd04674ede, 0xa400000000000000 }, { 0xfc6f7c4045812296, 0x4d00000000000000 },
  { 0x9dc5ada82b70b59d, 0xf020000000000000 }, { 0xc5371912364ce305, 0x6c28000000000000 }, { 0xf684df56c3e01bc6, 0xc732000000000000 },
  { 0x9a130b963a6c115c, 0x3c7f400000000000 }, { 0xc097ce7bc90715b3, 0x4b9f100000000000 }, { 0xf0bdc21abb48db20, 0x1e86d40000000000 },
  { 0x96769950b50d88f4, 0x1314448000000000 }, { 0xbc143fa4e250eb31, 0x17d955a000000000 }, { 0xeb194f8e1ae525fd, 0x5dcfab0800000000 },
  { 0x92efd1b8d0cf37be, 0x5aa1cae500000000 }, { 0xb7abc627050305ad, 0xf14a3d9e40000000 }, { 0xe596b7b0c643c719, 0x6d9ccd05d0000000 },
  { 0x8f7e32ce7bea5c6f, 0xe4820023a2000000 }, { 0xb35dbf821ae4f38b, 0xdda2802c8a800000 }, { 0xe0352f62a19e306e, 0xd50b2037ad200000 },
  { 0x8c213d9da502de45, 0x4526f422cc340000 }, { 0xaf298d050e4395d6, 0x9670b12b7f410000 }, { 0xdaf3f04651d47b4c, 0x3c0cdd765f114000 },
  { 0x88d8762bf324cd0f, 0xa5880a69fb6ac800 }, { 0xab0e93b6efee0053, 0x8eea0d047a457a00 }, { 0xd5d238a4abe98068, 0x72a4904598d6d880 },
  { 0x85a36366eb71f041, 0x47a6da2b7f864750 }, { 0xa70c3c40a64e6c51, 0x999090b65f67d924 }, { 0xd0cf4b50cfe20765, 0xfff4b4e3f741cf6d },
  { 0x82818f1281ed449f, 0xbff8f10e7a8921a4 }, { 0xa321f2d7226895c7, 0xaff72d52192b6a0d }, { 0xcbea6f8ceb02bb39, 0x9bf4f8a69f764490 },
  { 0xfee50b7025c36a08, 0x02f236d04753d5b4 }, { 0x9f4f2726179a2245, 0x01d762422c946590 }, { 0xc722f0ef9d80aad6, 0x424d3ad2b7b97ef5 },
  { 0xf8ebad2b84e0d58b, 0xd2e0898765a7deb2 }, { 0x9b934c3b330c8577, 0x63cc55f49f88eb2f }, { 0xc2781f49ffcfa6d5, 0x3cbf6b71c76b25fb },
};

/* After D. Lemire, "Number parsing at a gigabyte per second", Softw. Pract. Exp. 51, 1700 (2021): the digits times the first 128 bits of the power of
 * five give the first bits of the product. What the power lacks makes the product too small by less than 2 in the last of the 128 bits kept, so the
 * rounding is known unless the bits behind the 53rd are a half or one less. */
gboolean
bt_text_round_decimal (guint64 digits, int power, double *value)
{
  const guint64 *five;
  unsigned __int128 product, rest, half;
  guint64 bits;
  int lead, shift, exponent;

  if (digits == 0 || power < FIRST_POWER || power > LAST_POWER)
    return FALSE;
  five = powers_of_five[power - FIRST_POWER];
  lead = __builtin_clzll (digits);
  digits <<= lead;
  product = (unsigned __int128) digits * five[0] + (guint64) (((unsigned __int128) digits * five[1]) >> 64);
  /* 127 or 128 bits, of which 53 stay. */
  shift = (product >> 127) != 0 ? 75 : 74;
  half = (unsigned __int128) 1 << (shift - 1);
  rest = product & ((half << 1) - 1);
  if (rest == half || rest == half - 1)
    return FALSE;
  /* The mantissa's first bit is not stored: it adds the last one to the exponent, as does a mantissa that is rounded up to the next power of two. */
  exponent = shift + 64 - lead + ((power * LOG2_OF_5_65536) >> 16) - 127 + power;
  bits = ((guint64) (exponent + 1074) << 52) + (guint64) (product >> shift) + (rest > half ? 1 : 0);
  memcpy (value, &bits, sizeof bits);
  return TRUE;
}

#else

gboolean
bt_text_round_decimal (guint64 digits, int power, double *value)
{
  return FALSE;
}

#endif

using System.Globalization;
using System.Numerics;
using System.Text;
using CsCheck;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>The nearest double, against the framework's own reading and against exact arithmetic.</summary>
public class JsonNumberTests
{
    public static TheoryData<string> HardNumbers => new(
        // Next to or exactly between two doubles.
        "9007199254740993", "9007199254740992.5", "9007199254740991.5", "9007199254740995", "18014398509481986", "36028797018963972",
        "4503599627370496.5", "4503599627370497.5", "4503599627370497.4999999999", "1.5000000000000001110223", "0.50000000000000005551",
        "1e23", "8.5e22", "5e-324", "4.9406564584124654e-324", "2.4703282292062327e-324", "2.2250738585072011e-308", "2.2250738585072014e-308",
        "1.7976931348623157e308", "1.7976931348623158e308", "1.7976931348623159e308", "3.5e-310", "1e-300", "1e-301", "1e289", "1e290", "123456789e281",
        "6.631236871469758276785396630275672e-4", "7.0420557077594588669468784357561207962098443483187940792729600000e+59", "9214843084008499",
        "0.1", "0.2", "0.3", "1e22", "1e-22", "9007199254740992e22", "9007199254740993e-22", "1.0000000000000000000000000000001", "0.3e-5", "0.00000000000000000000000000000123",
        "123456789012345678", "1234567890123456789", "12345678901234567890", "123456789012345678901", "0.1234567890123456789", "0.12345678901234567890",
        "10000000000000000000", "9999999999999999999", "18446744073709551615", "18446744073709551616", "0.00000000000000000001", "99999999e-8", "100000000e-8",
        "0", "-0", "0.0", "-0.0", "0e5", "0e-400", "0e999999999999", "-0e-999999999999", "1e400", "-1e400", "1e-400", "-1e-400", "1e99999999999", "1e-99999999999");

    [Theory, MemberData(nameof(HardNumbers))]
    public void Read_HardNumber_IsNearestDouble(string text) => Compare(text);

    [Fact]
    public void Read_DoublesOfAnyBits_RoundTrip() => Gen.Long.Check(50_000, 11, bits =>
    {
        double value = BitConverter.Int64BitsToDouble(bits);
        if (!double.IsFinite(value)) return;
        string text = value.ToString("R", CultureInfo.InvariantCulture);
        Assert.Equal(bits, BitConverter.DoubleToInt64Bits(Read(text)));
    });

    [Fact]
    public void Read_RandomDigitsAndExponents_IsNearestDouble()
    {
        var gen = Gen.Select(Gen.Char['0', '9'].Array[1, 22], Gen.Int[0, 22], Gen.Int[-330, 310], Gen.Bool, (digits, point, exponent, isNegative) =>
        {
            string whole = new string(digits[..Math.Min(point, digits.Length)]).TrimStart('0');
            string fraction = new(digits[Math.Min(point, digits.Length)..]);
            return (isNegative ? "-" : "") + (whole.Length == 0 ? "0" : whole) + (fraction.Length == 0 ? "" : "." + fraction)
                + (exponent is > -10 and < 10 ? "" : $"e{exponent}");
        });
        gen.Check(50_000, 12, Compare);
    }

    /// <summary>Decimals of 19 digits that lie as near as they can to the middle between two doubles, where rounding is hardest.</summary>
    [Fact]
    public void Read_NumbersNextToMiddles_AreNearestByExactArithmetic() => Gen.Select(Gen.ULong, Gen.Int[-60, 30]).Check(10_000, 13, (sample) =>
    {
        var (bits, exponent) = sample;
        ulong middle = (bits & (1UL << 52) - 1 | 1UL << 52) * 2 + 1;
        // middle x 2^shift lies between two doubles; its decimal digits, cut to 19, lie just below and, one up, just above.
        int shift = exponent - 53;
        var numerator = shift >= 0 ? new BigInteger(middle) << shift : middle;
        var denominator = shift >= 0 ? BigInteger.One : BigInteger.One << -shift;
        int power = (int)Math.Floor(BigInteger.Log10(numerator) - BigInteger.Log10(denominator)) - 18;
        var cut = power >= 0 ? numerator / (denominator * BigInteger.Pow(10, power)) : numerator * BigInteger.Pow(10, -power) / denominator;
        foreach (var mantissa in (BigInteger[])[cut, cut + 1])
        {
            string text = $"{mantissa}e{power}";
            double value = Read(text);
            Assert.True(IsNearest(value, mantissa, power), text);
        }
    });

    [Fact]
    public void TryFind_NumbersOfSeventeenDigits_AreNearlyAllFound()
    {
        int found = 0;
        Gen.Select(Gen.ULong[1, 100_000_000_000_000_000], Gen.Int[-200, 200]).Check(10_000, 14, sample =>
        {
            if (NearestDouble.TryFind(sample.Item1, sample.Item2, out _)) found++;
        });
        Assert.InRange(found, 9_990, 10_000);
    }

    [Fact]
    public void Read_ManyZerosAgainstHugeExponent_IsExact()
    {
        Assert.Equal(1.0, Read("0." + new string('0', 10_000) + "1e10001"));
        Assert.Equal(-25.0, Read("-25" + new string('0', 20_000) + "e-20000"));
        Assert.Equal(0.125, Read("0.125" + new string('0', 20_000)));
    }

    private static void Compare(string text)
    {
        double expected = double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
        Assert.Equal(BitConverter.DoubleToInt64Bits(expected), BitConverter.DoubleToInt64Bits(Read(text)));
    }

    /// <summary>Whether no neighbour of a value is nearer to mantissa x 10^power, and of two as near ones it is the even.</summary>
    private static bool IsNearest(double value, BigInteger mantissa, int power)
    {
        var distance = Distance(value, mantissa, power);
        foreach (double neighbour in (double[])[Math.BitDecrement(value), Math.BitIncrement(value)])
        {
            int order = distance.CompareTo(Distance(neighbour, mantissa, power));
            if (order > 0 || order == 0 && (BitConverter.DoubleToInt64Bits(value) & 1) != 0) return false;
        }
        return true;
    }

    /// <summary>|value - mantissa x 10^power|, both scaled to whole numbers by 2^200 and 10^60.</summary>
    private static BigInteger Distance(double value, BigInteger mantissa, int power)
    {
        long bits = BitConverter.DoubleToInt64Bits(value);
        int exponent = (int)(bits >> 52 & 0x7FF) - 1075;
        var scaledValue = (new BigInteger(bits & (1L << 52) - 1 | 1L << 52) << 200 + exponent) * BigInteger.Pow(10, 60);
        var scaledText = (mantissa << 200) * BigInteger.Pow(10, 60 + power);
        return BigInteger.Abs(scaledValue - scaledText);
    }

    private static unsafe double Read(string text)
    {
        byte[] utf8 = new byte[Encoding.UTF8.GetByteCount(text) + RecordBatch.Padding];
        int length = Encoding.UTF8.GetBytes(text, utf8);
        fixed (byte* start = utf8)
        {
            byte* end = JsonNumber.Read(start, new JsonFault(), out double value);
            Assert.Equal(length, end - start);
            return value;
        }
    }
}

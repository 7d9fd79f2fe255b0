using System.Text.Json;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>The grammar of RFC 8259, each case as a whole record and as a value that nobody reads.</summary>
public class JsonConformanceTests
{
    public static TheoryData<string> ValidValues => new(
        "null", "true", "false", "0", "-0", "1", "-1", "10", "1234567890", "0.5", "-0.5", "0.0", "-0.0", "0.000001", "1.0", "1.50",
        "1e0", "1E0", "1e+0", "1e-0", "1e5", "1E5", "1e+5", "1E+5", "1e-5", "1E-5", "0e0", "0E+9", "-0e-9", "1.5e3", "-1.5E-3", "1e007", "1e999",
        "-1e999", "1e-999", "1e99999999999999999999", "1e-99999999999999999999", "123456789012345678901234567890", "0.1234567890123456789012345",
        "3.141592653589793238462643383279", "9007199254740993", "18446744073709551616", "4.9e-324", "1.7976931348623157e308",
        "\"\"", "\"a\"", "\" \"", "\"0123456789abcdef\"", "\"0123456789abcdef0\"", "\"0123456789abcde\"", "\"\\\"\"", "\"\\\\\"", "\"\\/\"", "\"/\"",
        "\"\\b\\f\\n\\r\\t\"", "\"\\u0041\"", "\"\\u00e9\"", "\"\\u00E9\"", "\"\\u20ac\"", "\"\\ud83d\\ude00\"", "\"\\uD83D\\uDE00\"", "\"\\u0000\"",
        "\"\\uffff\"", "\"\\ufffe\"", "\"\\ue000\"", "\"\\ud7ff\"", "\"\\udbff\\udfff\"", "\"\\u0022\"", "\"\\u005c\"", "\"\\\\u12\"", "\"é\"", "\"€\"",
        "\"😀\"", "\"\u007f\"", "\"\u0080\"", "\"\u2028\u2029\"", "\"\ufeff\"", "\"\uffff\"", "\"{}[],:\"", "\"//x\"", "\"'\"", "\"null\"",
        "[]", "[ ]", "[1]", "[1,2]", "[ 1 , 2 ]", "[null,true,false]", "[[]]", "[[],[]]", "[[[1]]]", "[{}]", "[{},{}]", "[\"a\",1]", "[\t1\n,\r2 ]",
        "{}", "{ }", "{\"a\":1}", "{\"a\":1,\"b\":2}", "{ \"a\" : 1 , \"b\" : 2 }", "{\"\":0}", "{\"a\":{}}", "{\"a\":[]}", "{\"a\":{\"a\":{\"a\":1}}}",
        "{\"\\u0061\":1}", "{\"a b\":1}", "{\"a\\nb\":1}", "{\"é\":1}", "{\"a\":null}", "\t{\n\"a\"\r:\n1 }\n", " 1 ", "\r\n\"x\"\r\n");

    public static TheoryData<string> InvalidValues => new(
        "", " ", "nul", "nulll", "Null", "NULL", "tru", "truee", "True", "fals", "falsey", "FALSE", "n", "t", "f", "undefined", "NaN", "nan", "Infinity",
        "-Infinity", "inf", "-", "+", "+1", "--1", "-a", "- 1", "01", "-01", "00", "-00", "0123", "08", "1.", "-1.", ".5", "-.5", "0.", "1.e5", "1.+5", "0..1",
        "1.2.3", "1e", "1E", "1e+", "1e-", "1e1.5", "1ee5", "1e5e", "1e 5", "e5", "0x10", "0x", "1_000", "1,000,", "1a", "1 2", "0 0", "1f", "1d", "1L", "1%",
        "١", "½", "\"", "\"a", "a\"", "\"a\"\"", "\"a\"b", "'a'", "a", "`a`", "\"\\\"", "\"\\", "\"\\a\"", "\"\\x41\"", "\"\\0\"", "\"\\'\"", "\"\\u\"",
        "\"\\u1\"", "\"\\u12\"", "\"\\u123\"", "\"\\u123g\"", "\"\\u 123\"", "\"\\U0041\"", "\"\\u+041\"", "\"\\u00e\"", "\"\\ud83d\\u\"", "\"\\ud83d\\x\"",
        "\"\\v\"", "\"\\e\"", "\"\\ \"", "\"\\é\"", "\"\n\"", "\"\r\"", "\"\t\"", "\"\0\"", "\"\u0001\"", "\"\u001f\"", "\"0123456789abcdef\u001f\"", "\"\b\"",
        "[", "]", "[1", "[1,", "[,1]", "[1,]", "[,]", "[1,,2]", "[1 2]", "[1;2]", "[1:2]", "[}", "[1}", "[[]", "[]]", "[]1", "[1]]", "[\"a\"", "[\"a]", "[{]", "[{}",
        "{", "}", "{]", "{\"a\"}", "{\"a\":}", "{\"a\":1", "{\"a\":1,", "{\"a\":1,}", "{,}", "{,\"a\":1}", "{\"a\":1,,\"b\":2}", "{\"a\" 1}", "{\"a\",1}", "{\"a\"=1}",
        "{a:1}", "{'a':1}", "{1:1}", "{null:1}", "{\"a\":1 \"b\":2}", "{\"a\":1;\"b\":2}", "{\"a\":1:\"b\"}", "{\"a\"::1}", "{{}}", "{[]:1}", "{\"a\":1}}", "{\"a\":1}{}",
        "{\"a\":1},", "{\"a\":1} x", "{\"a\":[}", "{\"a\":[1}}", "{\"a\":{]}", "{\"a\\\":1}", "{\"a\n\":1}", "{\"\\q\":1}",
        "//x\n1", "/**/1", "1//x", "1/*x*/", "[1/*x*/]", "[1,//x\n2]", "{/**/}", "{\"a\":/**/1}", "{\"a\":1//x\n}", "#1", "<a/>",
        "\u000b1", "\u000c1", "\u00a01", "\u20281", "\ufeff1", "1\ufeff", "\u00851", "\0", "1\0", "\01", "{}\0", "[1,\0]", "[\01]", "{\0\"a\":1}", "{\"a\"\0:1}",
        "[1]\u001a", "@", "$", "(1)", "1+1", "1-1", "-1-", "1e1-", "=1", ",", ":", "{\"a\":1]", "[1)", "*");

    [Fact]
    public void Cases_Count_IsLargeEnough() => Assert.True(ValidValues.Count >= 100 && InvalidValues.Count >= 180);

    [Theory, MemberData(nameof(ValidValues))]
    public void Decode_ValidValueThatNobodyReads_IsAccepted(string value)
    {
        JsonDocument.Parse(value).Dispose();
        Assert.Equal(RejectReason.None, DecodedText.With($"\"x\":{value}").Reason);
        Assert.Equal(RejectReason.None, DecodedText.With($"\"x\":[{value},{value}]").Reason);
        Assert.Equal(RejectReason.None, DecodedText.With($"\"x\":{{\"y\":{value},\"z\":{value}}}").Reason);
        Assert.Equal(RejectReason.None, DecodedText.With($"\"x\":{value},\"amount\":1").Reason);
    }

    [Theory, MemberData(nameof(ValidValues))]
    public void Decode_ValidValueAsRecord_IsNotObjectOrLacksId(string value)
    {
        var expected = value.TrimStart()[0] == '{' ? RejectReason.IdMissing : RejectReason.NotObject;
        Assert.Equal(expected, DecodedText.Of(value).Reason);
    }

    [Theory, MemberData(nameof(InvalidValues))]
    public void Decode_InvalidValueAsRecord_IsNotJson(string value)
    {
        Assert.ThrowsAny<JsonException>(() => JsonDocument.Parse(value));
        var decoded = DecodedText.Of(value);
        Assert.Equal(RejectReason.NotJson, decoded.Reason);
        Assert.False(string.IsNullOrEmpty(decoded.Detail));
    }

    [Theory, MemberData(nameof(InvalidValues))]
    public void Decode_InvalidValueWithin_IsNotJson(string value)
    {
        foreach (string key in (string[])["x", "amount", "country", "payment", "label", "weight"])
            ExpectInvalid($"{{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"{key}\":{value}}}");
        ExpectInvalid($"{{\"id\":{value},\"time\":\"2026-03-01T08:15:30Z\"}}");
        ExpectInvalid($"{{\"id\":\"a\",\"time\":{value}}}");
        ExpectInvalid($"[{value}]");
        ExpectInvalid($"{{\"x\":{{\"y\":[{value}]}}}}");
    }

    /// <summary>Some of the texts are valid once they stand between others, as a comma or an end of an object: the reference decides.</summary>
    private static void ExpectInvalid(string record)
    {
        bool isValid = true;
        try
        {
            JsonDocument.Parse(record).Dispose();
        }
        catch (JsonException)
        {
            isValid = false;
        }
        Assert.Equal(isValid, DecodedText.Of(record).Reason != RejectReason.NotJson);
    }
}

using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>Bytes that are not UTF-8, and escapes that are half of a surrogate pair, wherever they stand.</summary>
public class EncodingFaultTests
{
    private const string Mark = "@@";

    public static TheoryData<string> InvalidUtf8 => new(
        "80", "BF", "8080", "C0", "C080", "C0AF", "C1BF", "C2", "C241", "C3C3", "DF", "DFC0", "E0", "E080", "E08080", "E09FBF", "E0A0", "E0A041", "E1", "E180", "E18041",
        "EDA080", "EDAFBF", "EDB080", "EDBFBF", "EDA080EDB080", "EF", "EFBF", "EFBFC0", "F0", "F080", "F0808080", "F08FBFBF", "F09080", "F0908041", "F09F98", "F48FBF",
        "F4908080", "F5808080", "F7BFBFBF", "F888808080", "FC8480808080", "FE", "FF", "FEFF", "FFFE", "41C2", "E282ACE2", "F09F9880F0");

    public static TheoryData<string> Places => new(
        "{\"id\":\"" + Mark + "\",\"time\":\"2026-03-01T08:15:30Z\"}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"country\":\"x" + Mark + "y\"}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"note\":\"" + Mark + "\"}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"note\":[{\"a\":[\"0123456789abcdef" + Mark + "\"]}]}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"" + Mark + "\":1}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"note\":{\"" + Mark + "\":1}}",
        "{\"id\":\"a\",\"time\":\"" + Mark + "\"}",
        "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"label\":\"" + Mark + "\"}",
        "[\"" + Mark + "\"]",
        "\"" + Mark + "\"");

    [Theory, MemberData(nameof(InvalidUtf8))]
    public void Decode_InvalidUtf8_IsNotUtf8(string hexadecimal)
    {
        foreach (var place in Places)
        {
            string[] around = place.Data.Split(Mark);
            byte[] record = [.. Encoding.UTF8.GetBytes(around[0]), .. Convert.FromHexString(hexadecimal), .. Encoding.UTF8.GetBytes(around[1])];
            Assert.Equal(RejectReason.NotUtf8, DecodedText.Of(record).Reason);
        }
    }

    [Theory, MemberData(nameof(InvalidUtf8))]
    public void Decode_InvalidUtf8AroundBrokenJson_IsNotUtf8First(string hexadecimal)
    {
        byte[] bytes = Convert.FromHexString(hexadecimal);
        Assert.Equal(RejectReason.NotUtf8, DecodedText.Of(bytes).Reason);
        Assert.Equal(RejectReason.NotUtf8, DecodedText.Of([(byte)'{', .. bytes]).Reason);
        Assert.Equal(RejectReason.NotUtf8, DecodedText.Of([.. "{}x"u8, .. bytes]).Reason);
    }

    [Fact]
    public void Decode_CharacterCutBetweenTwoRecords_RejectsBoth()
    {
        var batch = new RecordBatch(DecodedText.Schema);
        batch.Add([.. "{\"id\":\"a"u8, 0xC3], 1);
        batch.Add([0xA9, .. "\",\"time\":\"2026-03-01T08:15:30Z\"}"u8], 2);
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.Equal(RejectReason.NotUtf8, batch.Records[0].Reason);
        Assert.Equal(RejectReason.NotUtf8, batch.Records[1].Reason);
    }

    [Fact]
    public void Decode_InvalidUtf8InOneRecord_LeavesTheOthers()
    {
        byte[] good = Encoding.UTF8.GetBytes("{\"id\":\"é\",\"time\":\"2026-03-01T08:15:30Z\"}");
        var batch = new RecordBatch(DecodedText.Schema);
        batch.Add(good, 1);
        batch.Add([0xFF], 2);
        batch.Add(good, 3);
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.Equal([RejectReason.None, RejectReason.NotUtf8, RejectReason.None], batch.Records.ToArray().Select(record => record.Reason));
        Assert.Equal("é", Encoding.UTF8.GetString(batch.Id(2)));
    }

    [Fact]
    public void Decode_LoneSurrogates_AreNotUtf8()
    {
        string[] surrogates =
        [
            "\\ud800", "\\uDBFF", "\\udc00", "\\uDFFF", "\\ud800x", "x\\ud800", "\\ud800\\n", "\\ud800\\u0041", "\\ud800\\ud800", "\\udc00\\ud800", "\\udc00\\udc00", "\\ud83d\\ud83d\\ude00",
            "\\ud83d\\ude00\\ude00", "\\ud83d \\ude00", "\\ud83d\\\\ude00", "0123456789abcdef\\ud800", "\\udbff\\ue000", "\\udbff\\ud7ff",
        ];
        foreach (var place in Places)
        {
            foreach (string surrogate in surrogates)
            {
                var decoded = DecodedText.Of(place.Data.Replace(Mark, surrogate));
                Assert.Equal(RejectReason.NotUtf8, decoded.Reason);
                Assert.Contains("surrogate", decoded.Detail);
            }
        }
    }

    [Fact]
    public void Decode_EveryEscapedCodeUnit_IsItsCharacterOrLoneSurrogate()
    {
        for (int unit = 0; unit <= 0xFFFF; unit++)
        {
            string escape = unit % 2 == 0 ? $"\\u{unit:x4}" : $"\\u{unit:X4}";
            var decoded = DecodedText.Of($"{{\"id\":\"{escape}\",\"time\":\"2026-03-01T08:15:30Z\"}}");
            if (char.IsSurrogate((char)unit))
            {
                Assert.Equal(RejectReason.NotUtf8, decoded.Reason);
                continue;
            }
            Assert.Equal(RejectReason.None, decoded.Reason);
            Assert.Equal(((char)unit).ToString(), decoded.Id);
        }
    }

    [Fact]
    public void Decode_EscapedPairs_AreTheirCharacters()
    {
        for (int code = 0x10000; code <= 0x10FFFF; code += 251)
        {
            string text = char.ConvertFromUtf32(code);
            Assert.Equal(text, DecodedText.Of($"{{\"id\":\"\\u{(int)text[0]:x4}\\u{(int)text[1]:x4}\",\"time\":\"2026-03-01T08:15:30Z\"}}").Id);
        }
    }
}

using System.Collections.Immutable;
using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

public class RecordPartsTests
{
    private const string Time = "\"time\":\"2026-03-01T08:15:30Z\"";

    [Theory]
    [InlineData("\"t-81\"", "t-81")]
    [InlineData("\"\\u0074-8\\/1\"", "t-8/1")]
    [InlineData("\"a\\u0000b\"", "a\0b")]
    [InlineData("\"日本 😀\"", "日本 😀")]
    [InlineData("17", "17")]
    [InlineData("17.0", "17.0")]
    [InlineData("-1E+5", "-1E+5")]
    [InlineData("123456789012345678901234567890", "123456789012345678901234567890")]
    [InlineData("1e999", "1e999")]
    public void Id_StringOrNumber_IsItsText(string json, string expected)
    {
        var decoded = DecodedText.Of($"{{\"id\":{json},{Time}}}");
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.Equal(expected, decoded.Id);
        Assert.Equal(FieldHash.Of(Encoding.UTF8.GetBytes(expected)), decoded.Record.IdHash);
    }

    [Theory]
    [InlineData("amount", "41.5", 41.5)]
    [InlineData("amount", "-0", -0.0)]
    [InlineData("amount", "1e15", 1e15)]
    [InlineData("amount", "-1000000000000000", -1e15)]
    [InlineData("amount", "1e-999", 0.0)]
    [InlineData("amount", "0.1234567890123456789012345", 0.1234567890123456789012345)]
    [InlineData("floor", "3", 3.0)]
    public void NumberField_Number_IsItsValue(string field, string json, double expected)
    {
        var decoded = DecodedText.With($"\"{field}\":{json}");
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.True(decoded.Field(field).IsPresent);
        Assert.Equal(BitConverter.DoubleToInt64Bits(expected), BitConverter.DoubleToInt64Bits(decoded.Field(field).Number));
    }

    [Theory]
    [InlineData("country", "\"QX\"", "QX")]
    [InlineData("country", "\"\"", "")]
    [InlineData("country", "\"\\u0051X\"", "QX")]
    [InlineData("country", "\"a\\u0000\"", "a\0")]
    [InlineData("country", "3.10", "3.10")]
    [InlineData("country", "1e999", "1e999")]
    [InlineData("country", "true", "true")]
    [InlineData("country", "false", "false")]
    [InlineData("floor", "-2.50", "-2.50")]
    public void CategoryField_Scalar_IsItsText(string field, string json, string expected)
    {
        var decoded = DecodedText.With($"\"{field}\":{json}");
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.True(decoded.Field(field).IsPresent);
        Assert.Equal(expected, decoded.Text(field));
        Assert.Equal(FieldHash.Of(Encoding.UTF8.GetBytes(expected)), decoded.Field(field).Hash);
    }

    [Theory]
    [InlineData("")]
    [InlineData("\"amount\":null,\"country\":null,\"floor\":null,\"payment\":null")]
    [InlineData("\"payment\":{}")]
    [InlineData("\"payment\":{\"fee\":null,\"card\":null}")]
    [InlineData("\"payment\":{\"card\":{\"kind\":null}}")]
    [InlineData("\"payment.fee\":null,\"payment.card.kind\":null")]
    public void Fields_AbsentOrNull_AreNotPresent(string members)
    {
        var decoded = DecodedText.With(members);
        Assert.Equal(RejectReason.None, decoded.Reason);
        foreach (var (path, _) in DecodedText.Schema.Fields) Assert.False(decoded.Field(path).IsPresent);
        Assert.True(double.IsNaN(decoded.Record.Weight));
    }

    [Theory]
    [InlineData("\"payment\":{\"fee\":2.5,\"card\":{\"kind\":\"debit\"}}")]
    [InlineData("\"payment\":{\"x\":[1],\"card\":{\"y\":{},\"kind\":\"debit\",\"z\":0},\"fee\":2.5,\"w\":null}")]
    [InlineData("\"payment\" : { \"fee\" : 2.5 , \"card\" : { \"kind\" : \"debit\" } }")]
    [InlineData("\"payment.fee\":2.5,\"payment.card.kind\":\"debit\"")]
    [InlineData("\"payment\":{\"fee\":2.5},\"payment.card.kind\":\"debit\"")]
    [InlineData("\"payment\":\"by card\",\"payment.fee\":2.5,\"payment.card.kind\":\"debit\"")]
    [InlineData("\"p\\u0061yment\":{\"f\\u0065e\":2.5,\"c\\u0061rd\":{\"kin\\u0064\":\"debi\\u0074\"}}")]
    public void DottedPath_NestedOrFlat_IsRead(string members)
    {
        var decoded = DecodedText.With(members);
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.Equal(2.5, decoded.Field("payment.fee").Number);
        Assert.Equal("debit", decoded.Text("payment.card.kind"));
    }

    [Fact]
    public void DottedPath_OfIdTimeLabelAndWeight_IsRead()
    {
        var options = DecodedText.Options with { Id = "key.id", Time = "key.at", Label = "truth.label", Weight = "truth.w.eight" };
        var decoded = DecodedText.Of(
            "{\"truth\":{\"w\":{\"eight\":2},\"label\":1},\"key\":{\"at\":\"2026-03-01T08:15:30Z\",\"id\":7},\"id\":\"no\"}", DecodedText.SchemaOf(options));
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.Equal(("7", 1, 2.0), (decoded.Id, decoded.Record.Label, decoded.Record.Weight));
    }

    [Fact]
    public void Path_ThatIsAlsoTheStartOfAnother_IsReadAsWhatItHolds()
    {
        var schema = DecodedText.SchemaOf(DecodedText.Options, new CategoryFeature(["card"]), new CategoryFeature(["card.kind"]));
        var flat = DecodedText.With("\"card\":\"debit\",\"card.kind\":\"x\"", schema);
        Assert.Equal(("debit", "x"), (flat.Text("card"), flat.Text("card.kind")));
        Assert.Equal(RejectReason.CategoryUnreadable, DecodedText.With("\"card\":{\"kind\":\"debit\"}", schema).Reason);
        Assert.Equal(RejectReason.CategoryUnreadable, DecodedText.With("\"card\":\"debit\"", schema).Reason);
    }

    [Theory]
    [InlineData("1", 1)]
    [InlineData("0", 0)]
    [InlineData("1.0", 1)]
    [InlineData("10e-1", 1)]
    [InlineData("-0", 0)]
    [InlineData("0e7", 0)]
    [InlineData("\"1\"", 1)]
    [InlineData("\"0\"", 0)]
    [InlineData("\"stolen\"", 1)]
    [InlineData("\"st\\u006flen\"", 1)]
    [InlineData("\"\\u0070\\u0061\\u0069\\u0064\"", 0)]
    [InlineData("true", 1)]
    [InlineData("false", 0)]
    [InlineData("\"true\"", 1)]
    public void Label_InTheMapping_IsItsMeaning(string json, int expected)
    {
        var decoded = DecodedText.With($"\"label\":{json},\"amount\":1");
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.Equal((RecordKind.LabelledEvent, expected), (decoded.Record.Kind, decoded.Record.Label));
    }

    [Theory]
    [InlineData("2")]
    [InlineData("-1")]
    [InlineData("0.5")]
    [InlineData("1e999")]
    [InlineData("1.0000000000000003")]
    [InlineData("\"\"")]
    [InlineData("\"1.0\"")]
    [InlineData("\" 1\"")]
    [InlineData("\"Stolen\"")]
    [InlineData("\"stolen \"")]
    [InlineData("{}")]
    [InlineData("[1]")]
    public void Label_NotInTheMapping_IsNotBinary(string json) =>
        Assert.Equal(RejectReason.LabelNotBinary, DecodedText.With($"\"label\":{json}").Reason);

    [Fact]
    public void Label_BooleanWithoutItsWord_IsNotBinary()
    {
        var schema = DecodedText.SchemaOf(new RecordOptions());
        Assert.Equal(RejectReason.LabelNotBinary, DecodedText.With("\"label\":true", schema).Reason);
        Assert.Equal(RejectReason.None, DecodedText.With("\"label\":1", schema).Reason);
    }

    [Fact]
    public void Label_KeysOfEqualValue_FirstInOrdinalOrderCounts()
    {
        var values = ImmutableDictionary<string, int>.Empty.Add("1.0", 0).Add("1", 1).Add("1e0", 0);
        var schema = DecodedText.SchemaOf(DecodedText.Options with { LabelValues = values });
        Assert.Equal(1, DecodedText.With("\"label\":1.0", schema).Record.Label);
        Assert.Equal(0, DecodedText.With("\"label\":\"1.0\"", schema).Record.Label);
    }

    [Theory]
    [InlineData("0", 0.0)]
    [InlineData("-0", 0.0)]
    [InlineData("2.5", 2.5)]
    [InlineData("1e6", 1e6)]
    [InlineData("1e-999", 0.0)]
    public void Weight_WithinRange_IsItsValue(string json, double expected)
    {
        var decoded = DecodedText.With($"\"weight\":{json}");
        Assert.Equal(RejectReason.None, decoded.Reason);
        Assert.Equal(BitConverter.DoubleToInt64Bits(expected), BitConverter.DoubleToInt64Bits(decoded.Record.Weight));
    }

    [Theory]
    [InlineData("\"amount\":1", RecordKind.Event)]
    [InlineData("", RecordKind.Event)]
    [InlineData("\"label\":null", RecordKind.Event)]
    [InlineData("\"label\":null,\"amount\":1", RecordKind.Event)]
    [InlineData("\"label\":1,\"amount\":1", RecordKind.LabelledEvent)]
    [InlineData("\"label\":1,\"amount\":null", RecordKind.LabelledEvent)]
    [InlineData("\"label\":1,\"payment\":{\"card\":{\"kind\":null}}", RecordKind.LabelledEvent)]
    [InlineData("\"payment.fee\":null,\"label\":1", RecordKind.LabelledEvent)]
    [InlineData("\"label\":1", RecordKind.Label)]
    [InlineData("\"label\":1,\"weight\":3,\"x\":{\"amount\":1}", RecordKind.Label)]
    [InlineData("\"label\":1,\"payment\":{}", RecordKind.Label)]
    [InlineData("\"label\":1,\"payment\":null", RecordKind.Label)]
    public void Kind_ByLabelAndFieldKeys(string members, RecordKind expected)
    {
        var decoded = DecodedText.With(members);
        Assert.Equal((RejectReason.None, expected), (decoded.Reason, decoded.Record.Kind));
    }

    [Fact]
    public void Kind_WithoutFieldsOfItsOwn_IsEvent()
    {
        Assert.Equal(RecordKind.LabelledEvent, DecodedText.With("\"label\":1", DecodedText.SchemaOf(DecodedText.Options)).Record.Kind);
        var onlyCommon = DecodedText.SchemaOf(DecodedText.Options, new CategoryFeature(["id"]));
        Assert.Equal(RecordKind.LabelledEvent, DecodedText.With("\"label\":1", onlyCommon).Record.Kind);
    }

    [Fact]
    public void Kind_FieldAtThePathOfTheTime_DoesNotMakeAnEvent()
    {
        var schema = DecodedText.SchemaOf(
            DecodedText.Options with { TimeFormat = TimeFormat.UnixSeconds }, new NumberCycleFeature("time", 86400), new CategoryFeature(["country"]));
        var decoded = DecodedText.Of("{\"id\":1,\"time\":1772352930.5,\"label\":1}", schema);
        Assert.Equal((RecordKind.Label, 1772352930.5, 1_772_352_930_500_000), (decoded.Record.Kind, decoded.Field("time").Number, decoded.Record.TimeMicroseconds));
    }

    [Theory]
    [InlineData(TimeFormat.UnixSeconds, "1772352930.25", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.UnixSeconds, "\"1772352930.25\"", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.UnixSeconds, "\"17723529\\u00330.25\"", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.UnixSeconds, "-0.0000001", -1)]
    [InlineData(TimeFormat.UnixMilliseconds, "1772352930250", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.UnixMilliseconds, "1772352930250.7509", 1_772_352_930_250_750)]
    [InlineData(TimeFormat.UnixMilliseconds, "\"1.77235293025e12\"", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.Rfc3339, "\"2026-03-01T08:15:30.25Z\"", 1_772_352_930_250_000)]
    [InlineData(TimeFormat.Rfc3339, "\"2026-03-01\\u005408:15:30.25+00:00\"", 1_772_352_930_250_000)]
    public void Time_InItsFormat_IsRead(TimeFormat format, string json, long expected)
    {
        var decoded = DecodedText.Of($"{{\"id\":1,\"time\":{json}}}", DecodedText.SchemaOf(DecodedText.Options with { TimeFormat = format }));
        Assert.Equal((RejectReason.None, expected), (decoded.Reason, decoded.Record.TimeMicroseconds));
    }
}

using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>Every reason that the decoder gives, what the detail says, and which of several reasons is given.</summary>
public class RejectReasonTests
{
    private const string Start = "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\"";

    [Theory]
    [InlineData(RejectReason.NotJson, "", "the record ends after 0 bytes; a JSON value is wanted")]
    [InlineData(RejectReason.NotJson, "\ufeff{}", "at byte 1: a JSON value is wanted")]
    [InlineData(RejectReason.NotJson, Start, "the record ends after 39 bytes; ',' or '}' is wanted")]
    [InlineData(RejectReason.NotJson, Start + "}}", "at byte 41: the end of the record is wanted")]
    [InlineData(RejectReason.NotJson, Start + ",\"amount\":01}", "at byte 51: a number without leading zeros is wanted")]
    [InlineData(RejectReason.NotUtf8, Start + ",\"x\":\"\\ud800\"}", "the escape at byte 46 is half of a surrogate pair")]
    [InlineData(RejectReason.NotUtf8, Start + ",\"x\":\"\\ud800\\ud801\"}", "the escape at byte 46 is half of a surrogate pair")]
    [InlineData(RejectReason.NotObject, "[]", "the record is an array; an object is wanted")]
    [InlineData(RejectReason.NotObject, " null", "the record is null; an object is wanted")]
    [InlineData(RejectReason.NotObject, "\"a\"", "the record is a string; an object is wanted")]
    [InlineData(RejectReason.NotObject, "-1", "the record is a number; an object is wanted")]
    [InlineData(RejectReason.NotObject, "true", "the record is a boolean; an object is wanted")]
    [InlineData(RejectReason.TooDeep, Start + ",\"x\":[[[[[[]]]]]]}", "at byte 50 objects and arrays are nested deeper than 6")]
    [InlineData(RejectReason.DuplicateKey, Start + ",\"x\":1,\"x\":1}", "the key 'x' stands twice in one object")]
    [InlineData(RejectReason.IdMissing, "{\"time\":\"2026-03-01T08:15:30Z\"}", "id 'id' is absent or null")]
    [InlineData(RejectReason.IdMissing, "{\"id\":null,\"time\":\"2026-03-01T08:15:30Z\"}", "id 'id' is absent or null")]
    [InlineData(RejectReason.IdEmpty, "{\"id\":\"\",\"time\":\"2026-03-01T08:15:30Z\"}", "id 'id' holds the string \"\"; a string with at least one character is wanted")]
    [InlineData(RejectReason.IdUnreadable, "{\"id\":true,\"time\":\"2026-03-01T08:15:30Z\"}", "id 'id' holds true; a string or a number is wanted")]
    [InlineData(RejectReason.IdUnreadable, "{\"id\":[1],\"time\":\"2026-03-01T08:15:30Z\"}", "id 'id' holds an array; a string or a number is wanted")]
    [InlineData(RejectReason.TimeMissing, "{\"id\":\"a\"}", "time 'time' is absent or null")]
    [InlineData(RejectReason.TimeMissing, "{\"id\":\"a\",\"time\":null}", "time 'time' is absent or null")]
    [InlineData(RejectReason.TimeUnreadable, "{\"id\":\"a\",\"time\":17}",
        "time 'time' holds the number 17; an RFC 3339 date-time with an offset, as 2026-03-01T08:15:30.120Z, is wanted")]
    [InlineData(RejectReason.TimeUnreadable, "{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30\"}",
        "time 'time' holds the string \"2026-03-01T08:15:30\"; an offset from UTC behind the time, as Z or +02:00, is wanted")]
    [InlineData(RejectReason.TimeUnreadable, "{\"id\":\"a\",\"time\":\"2026-02-30T08:15:30Z\"}",
        "time 'time' holds the string \"2026-02-30T08:15:30Z\"; a day, a time of day and an offset that exist is wanted")]
    [InlineData(RejectReason.TimeUnreadable, "{\"id\":\"a\",\"time\":\"0000-02-20T08:15:30Z\"}",
        "time 'time' holds the string \"0000-02-20T08:15:30Z\"; a time in the years 0001 to 9999 is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"amount\":\"41\"}", "field 'amount' holds the string \"41\"; a number is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"amount\":true}", "field 'amount' holds true; a number is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"amount\":{\"a\":1}}", "field 'amount' holds an object; a number is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"floor\":\"3\"}", "field 'floor' holds the string \"3\"; a number is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"payment\":7}", "'payment' on the way to field 'payment.fee' holds the number 7; an object is wanted")]
    [InlineData(RejectReason.NumberUnreadable, Start + ",\"payment\":[]}", "'payment' on the way to field 'payment.fee' holds an array; an object is wanted")]
    [InlineData(RejectReason.NumberOutOfRange, Start + ",\"amount\":1.0000000000000002e15}",
        "field 'amount' holds the number 1.0000000000000002e15; a number within -1e15 to 1e15 is wanted")]
    [InlineData(RejectReason.NumberOutOfRange, Start + ",\"amount\":-1e999}", "field 'amount' holds the number -1e999; a number within -1e15 to 1e15 is wanted")]
    [InlineData(RejectReason.CategoryUnreadable, Start + ",\"country\":[\"QX\"]}", "field 'country' holds an array; a string, a number, true or false is wanted")]
    [InlineData(RejectReason.CategoryUnreadable, Start + ",\"country\":{}}", "field 'country' holds an object; a string, a number, true or false is wanted")]
    [InlineData(RejectReason.CategoryUnreadable, Start + ",\"payment\":{\"card\":\"x\"}}",
        "'card' on the way to field 'payment.card.kind' holds the string \"x\"; an object is wanted")]
    [InlineData(RejectReason.LabelNotBinary, Start + ",\"label\":\"maybe\"}",
        "label 'label' holds the string \"maybe\"; one of 0, 1, false, paid, stolen, true is wanted")]
    [InlineData(RejectReason.WeightOutOfRange, Start + ",\"weight\":-1}", "weight 'weight' holds the number -1; a number from 0 to 1000000 is wanted")]
    [InlineData(RejectReason.WeightOutOfRange, Start + ",\"weight\":1000000.1}", "weight 'weight' holds the number 1000000.1; a number from 0 to 1000000 is wanted")]
    [InlineData(RejectReason.WeightOutOfRange, Start + ",\"weight\":1e999}", "weight 'weight' holds the number 1e999; a number from 0 to 1000000 is wanted")]
    [InlineData(RejectReason.WeightOutOfRange, Start + ",\"weight\":\"2\"}", "weight 'weight' holds the string \"2\"; a number from 0 to 1000000 is wanted")]
    public void Decode_Unusable_TellsReasonDetailAndPosition(RejectReason reason, string record, string detail)
    {
        byte[] bytes = Encoding.UTF8.GetBytes(record);
        var batch = new RecordBatch(DecodedText.Schema);
        batch.Add("{\"id\":\"before\",\"time\":\"2026-03-01T08:15:30Z\"}"u8, 41);
        batch.Add(bytes, 4711);
        batch.Add("{\"id\":\"behind\",\"time\":\"2026-03-01T08:15:30Z\"}"u8, 4712);
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.Equal((RecordKind.Reject, reason, detail), (batch.Records[1].Kind, batch.Records[1].Reason, batch.Records[1].Detail));
        Assert.Equal(4711, batch.Records[1].Position);
        Assert.Equal(bytes, batch.RecordBytes(1).ToArray());
        Assert.Equal(("before", "behind"), (Encoding.UTF8.GetString(batch.Id(0)), Encoding.UTF8.GetString(batch.Id(2))));
    }

    [Fact]
    public void Decode_TooLong_IsRejectedBeforeAnythingElse()
    {
        int most = DecodedText.Options.MaximumBytes;
        string fits = Start + ",\"x\":\"" + new string('y', most - Start.Length - 8) + "\"}";
        Assert.Equal(most, fits.Length);
        Assert.Equal(RejectReason.None, DecodedText.Of(fits).Reason);
        var tooLong = DecodedText.Of(fits + " ");
        Assert.Equal((RejectReason.TooLong, "the record has 4001 bytes; at most 4000 are wanted"), (tooLong.Reason, tooLong.Detail));
        Assert.Equal(RejectReason.TooLong, DecodedText.Of([.. Enumerable.Repeat((byte)0xFF, most + 1)]).Reason);
    }

    [Fact]
    public void Decode_RecordThatIsARejectAlready_IsLeftAlone()
    {
        var batch = new RecordBatch(DecodedText.Schema);
        batch.AddTooLong(Encoding.UTF8.GetBytes(Start + "}"), 3, "said by the source");
        new RecordDecoder(DecodedText.Schema).Decode(batch);
        Assert.Equal((RecordKind.Reject, RejectReason.TooLong, "said by the source"), (batch.Records[0].Kind, batch.Records[0].Reason, batch.Records[0].Detail));
    }

    [Theory]
    [InlineData(1, "{}", RejectReason.IdMissing)]
    [InlineData(1, "{\"x\":[]}", RejectReason.TooDeep)]
    [InlineData(1, "{\"payment\":{}}", RejectReason.TooDeep)]
    [InlineData(2, "{\"x\":[],\"y\":{},\"payment\":{\"fee\":1}}", RejectReason.IdMissing)]
    [InlineData(2, "{\"x\":[[]]}", RejectReason.TooDeep)]
    [InlineData(2, "[[1]]", RejectReason.NotObject)]
    [InlineData(2, "[[[1]]]", RejectReason.TooDeep)]
    [InlineData(2, "{\"payment\":{\"card\":{}}}", RejectReason.TooDeep)]
    [InlineData(2, "{\"payment\":{\"x\":[]}}", RejectReason.TooDeep)]
    [InlineData(2, "{\"amount\":[[]]}", RejectReason.TooDeep)]
    [InlineData(int.MaxValue, "{\"x\":[[[[[[[[[[{}]]]]]]]]]]}", RejectReason.IdMissing)]
    public void Decode_Nesting_IsAllowedUpToTheMaximum(int maximumDepth, string record, RejectReason expected)
    {
        var schema = DecodedText.SchemaOf(
            DecodedText.Options with { MaximumDepth = maximumDepth },
            new NumberFeature("amount", NumberScale.None), new NumberFeature("payment.fee", NumberScale.None), new CategoryFeature(["payment.card.kind"]));
        Assert.Equal(expected, DecodedText.Of(record, schema).Reason);
    }

    [Fact]
    public void Decode_VeryDeepNesting_NeedsNoStack()
    {
        const int depth = 200_000;
        var schema = DecodedText.SchemaOf(DecodedText.Options with { MaximumDepth = depth, MaximumBytes = 1 << 20 });
        Assert.Equal(RejectReason.NotObject, DecodedText.Of(new string('[', depth) + new string(']', depth), schema).Reason);
        Assert.Equal(RejectReason.NotJson, DecodedText.Of(new string('[', depth), schema).Reason);
        Assert.Equal(RejectReason.TooDeep, DecodedText.Of(new string('[', depth + 1), schema).Reason);
    }

    /// <summary>A record with every fault, from which one after the other is taken away.</summary>
    [Fact]
    public void Decode_SeveralFaults_GivesTheFirstInTheStatedOrder()
    {
        (string Fault, string Without, RejectReason Reason)[] faults =
        [
            ("]", "", RejectReason.NotJson),
            (",\"s\":\"\\udfff\"", "", RejectReason.NotUtf8),
            (",\"d\":1,\"d\":1", "", RejectReason.DuplicateKey),
            (",\"id\":{}", ",\"id\":\"a\"", RejectReason.IdUnreadable),
            (",\"time\":\"?\"", ",\"time\":\"2026-03-01T08:15:30Z\"", RejectReason.TimeUnreadable),
            (",\"label\":7", "", RejectReason.LabelNotBinary),
            (",\"weight\":-7", "", RejectReason.WeightOutOfRange),
            (",\"amount\":1e300", "", RejectReason.NumberOutOfRange),
            (",\"country\":[]", "", RejectReason.CategoryUnreadable),
            (",\"floor\":\"x\"", "", RejectReason.NumberUnreadable),
        ];
        for (int gone = 0; gone <= faults.Length; gone++)
        {
            var members = faults.Select((fault, i) => i < gone ? fault.Without : fault.Fault).Skip(1);
            foreach (var ordered in (IEnumerable<string>[])[members, members.Reverse()])
            {
                string record = "{" + string.Concat(ordered).TrimStart(',') + "}" + (gone == 0 ? faults[0].Fault : "");
                Assert.Equal(gone == faults.Length ? RejectReason.None : faults[gone].Reason, DecodedText.Of(record).Reason);
            }
        }
    }

    [Theory]
    [InlineData("{\"x\":[[[[[[0]]]]]],", RejectReason.TooDeep)]
    [InlineData("{\"x\":?,\"y\":[[[[[[0]]]]]]}", RejectReason.NotJson)]
    [InlineData("[\"\\ud800\"]", RejectReason.NotUtf8)]
    [InlineData("[{\"a\":1,\"a\":1}]", RejectReason.NotObject)]
    [InlineData("{\"id\":\"\",\"time\":0}", RejectReason.IdEmpty)]
    [InlineData("{\"label\":7,\"weight\":-1}", RejectReason.IdMissing)]
    [InlineData("{\"id\":1,\"label\":7}", RejectReason.TimeMissing)]
    public void Decode_TwoFaults_GivesTheFirstInTheStatedOrder(string record, RejectReason expected) =>
        Assert.Equal(expected, DecodedText.Of(record).Reason);

    [Fact]
    public void Decode_LongValue_IsQuotedShort()
    {
        string? detail = DecodedText.With($"\"amount\":\"{new string('é', 100)}\"").Detail;
        Assert.Equal($"field 'amount' holds the string \"{new string('é', 20)}...\"; a number is wanted", detail);
    }
}

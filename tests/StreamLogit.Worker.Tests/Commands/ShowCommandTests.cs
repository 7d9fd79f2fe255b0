using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Commands;

public sealed class ShowCommandTests : IDisposable
{
    private readonly WorkerFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Show_Json_HasTheseMembersAndTheModel()
    {
        RunDemo();

        var json = StreamLogitProcess.Run("show", _folder.State, "--json").Json;

        Assert.Equal(["version", "settings", "blend"], json.EnumerateObject().Select(member => member.Name));
        Assert.Equal(9_920, json.GetProperty("version").GetInt64());
        var settings = json.GetProperty("settings").EnumerateArray().ToList();
        Assert.Equal(4, settings.Count);
        Assert.All(settings, setting =>
        {
            Assert.Equal(["name", "intercept", "coefficients"], setting.EnumerateObject().Select(member => member.Name));
            var coefficients = setting.GetProperty("coefficients").EnumerateArray().ToList();
            Assert.All(coefficients, coefficient => Assert.Equal(["feature", "value"], coefficient.EnumerateObject().Select(member => member.Name)));
            var values = coefficients.ToDictionary(c => c.GetProperty("feature").GetString()!, c => c.GetProperty("value").GetDouble());
            // Worn bearings shake and run hot; that sensor reads too high since midway.
            Assert.InRange(values["bearing.vibration"], 0.3, 3);
            Assert.InRange(values["bearing.temperature"], 0.3, 3);
            Assert.Contains("station=dunmoor", values.Keys);
            Assert.Contains("flow missing", values.Keys);
        });
        Assert.Equal(settings.Select(s => s.GetProperty("name").GetString()), json.GetProperty("blend").EnumerateArray().Select(b => b.GetProperty("name").GetString()));
        Assert.Equal(1, json.GetProperty("blend").EnumerateArray().Sum(b => b.GetProperty("weight").GetDouble()), 1e-12);
    }

    [Fact]
    public void Show_Table_HasTheLargestCoefficientsFirst()
    {
        RunDemo();

        var result = StreamLogitProcess.Run("show", _folder.State, "--top", "3");
        var byFile = StreamLogitProcess.Run("show", Path.Combine(_folder.State, "state.db"), "--top", "3");

        Assert.Equal(0, result.ExitCode);
        Assert.DoesNotContain('\u001b', result.Output);
        Assert.Equal(5, result.Table("setting").Count);
        var coefficients = result.Table("feature").Skip(1).ToList();
        Assert.Equal(3, coefficients.Count);
        Assert.Equal("bearing.vibration", coefficients[0][0]);
        Assert.Equal(coefficients, coefficients.OrderByDescending(row => Math.Abs(double.Parse(row[1]))));
        Assert.Equal(result.Output, byFile.Output);
    }

    [Fact]
    public void Show_Health_IsWhatTheRunSaidAtItsEnd()
    {
        var run = StreamLogitProcess.Run(_folder.Demo().RunArguments(100_000));
        var shown = StreamLogitProcess.Run("show", _folder.State, "--health");

        Assert.Equal(0, shown.ExitCode);
        string[] ofMemory = ["bytes of memory for kept events"];
        Assert.Equal(run.Output.Split('\n').Where(line => !ofMemory.Any(line.StartsWith)), shown.Output.Split('\n'));
        Assert.Equal(["label delay", "late labels", "mean", "10 %", "50 %", "90 %", "99 %"], shown.Table("label delay")[0]);
        var ages = shown.Table("age of events").Skip(1).ToList();
        Assert.Equal(10_080, ages.Sum(row => int.Parse(row[1])));
        Assert.InRange(double.Parse(ages[^1][2]), 0.98, 1);
        Assert.InRange(double.Parse(ages[0][2]), 0, 0.2);
    }

    [Fact]
    public void Show_HealthAsJson_TellsLogLossByLabelTimeAndByEventTimeAndTheBlendOverTime()
    {
        RunDemo();

        var health = StreamLogitProcess.Run("show", _folder.State, "--health", "--json").Json;

        Assert.Equal((10_080, 9_920, 70, 90), (Count("events"), Count("labelled"), Count("awaiting"), Count("expired")));
        var byLabel = health.GetProperty("byLabelTime").GetProperty("days").EnumerateArray().ToList();
        var byEvent = health.GetProperty("byEventTime").GetProperty("days").EnumerateArray().ToList();
        int untilTheLastMinute = byLabel.Sum(day => day.GetProperty("labels").GetInt32());
        Assert.InRange(untilTheLastMinute, 9_918, 9_920);
        Assert.Equal(10_080, byEvent.Sum(day => day.GetProperty("events").GetInt32()));
        double total = health.GetProperty("windows")[0].GetProperty("logLoss").GetDouble();
        Assert.Equal(total, byLabel.Sum(day => day.GetProperty("labels").GetInt32() * LogLoss(day)) / untilTheLastMinute, 1e-3);
        Assert.Equal(total, byEvent.Sum(day => Math.Round(day.GetProperty("events").GetInt32() * day.GetProperty("labelledShare").GetDouble()) * LogLoss(day)) / 9_920, 1e-9);
        Assert.All(byLabel, day => Assert.Equal(1, day.GetProperty("settings").EnumerateArray().Sum(setting => setting.GetProperty("blendWeight").GetDouble()), 1e-9));

        int Count(string name) => health.GetProperty(name).GetInt32();
        static double LogLoss(System.Text.Json.JsonElement day) => day.GetProperty("logLoss").ValueKind == System.Text.Json.JsonValueKind.Null ? 0 : day.GetProperty("logLoss").GetDouble();
    }

    [Fact]
    public void Show_NoState_ExitsWith2()
    {
        Directory.CreateDirectory(_folder["empty"]);
        Directory.CreateDirectory(_folder["garbage"]);
        File.WriteAllText(Path.Combine(_folder["garbage"], "state.db"), "this is no database, but it is long enough to be read as one");

        Assert.All([_folder["nowhere"], _folder["empty"], _folder["garbage"]], path =>
        {
            var result = StreamLogitProcess.Run("show", path);
            Assert.Equal(2, result.ExitCode);
            Assert.StartsWith("streamlogit: ", result.Errors, StringComparison.Ordinal);
            Assert.DoesNotContain("   at ", result.Errors, StringComparison.Ordinal);
            Assert.Empty(result.Output);
        });
    }

    private void RunDemo() => Assert.Equal(0, StreamLogitProcess.Run(_folder.Demo().RunArguments(100_000)).ExitCode);
}

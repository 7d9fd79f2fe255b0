using System.CommandLine;
using System.Globalization;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Worker.Output;

namespace StreamLogit.Worker.Commands;

/// <summary><c>show</c>: shows the model or the health of a state.</summary>
internal static class ShowCommand
{
    private const int DefaultTop = 20;

    public static Command Create()
    {
        var path = new Argument<string>("STATE") { Description = "The state folder of a worker, or the file in it; the worker may be running" };
        var health = new Option<bool>("--health") { Description = "Show how the published probabilities did, instead of the model" };
        var json = new Option<bool>("--json") { Description = "Write everything as JSON" };
        var top = new Option<int?>("--top")
        {
            Description = $"How many coefficients the table has, the largest first; {DefaultTop} if not given",
            HelpName = "N",
            CustomParser = WholeNumber.Between("--top", 0, int.MaxValue),
        };
        var command = new ExampleCommand(
            "show", "Shows the coefficients and the blend of a saved model, or how its probabilities did",
            "streamlogit show demo-streams/out/pump-stations/state --top 10",
            "streamlogit show demo-streams/out/pump-stations/state --health")
        {
            path, health, json, top,
        };
        command.SetAction(result =>
        {
            var model = SavedModel.Read(result.GetRequiredValue(path));
            if (result.GetValue(health)) WriteHealth(model.Health, result.GetValue(json));
            else if (result.GetValue(json)) WriteJson(model.Snapshot);
            else WriteTables(model, result.GetValue(top) ?? DefaultTop);
            return ExitCode.Done;
        });
        return command;
    }

    private static void WriteHealth(HealthSnapshot health, bool asJson)
    {
        if (asJson) JsonOutput.Write(json => HealthJson.Write(json, health));
        else HealthTables.Write(health, Terminal.Output);
    }

    private static void WriteJson(ModelSnapshot model) => JsonOutput.Write(json =>
    {
        json.WriteStartObject();
        json.WriteNumber("version", model.Version);
        json.WriteStartArray("settings");
        foreach (var setting in model.Settings)
        {
            json.WriteStartObject();
            json.WriteString("name", setting.Name);
            json.WriteNumber("intercept", setting.Intercept);
            json.WriteStartArray("coefficients");
            foreach (var coefficient in setting.Coefficients)
            {
                json.WriteStartObject();
                json.WriteString("feature", coefficient.Feature);
                json.WriteNumber("value", coefficient.Value);
                json.WriteEndObject();
            }
            json.WriteEndArray();
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("blend");
        foreach (var part in model.Blend)
        {
            json.WriteStartObject();
            json.WriteString("name", part.Name);
            json.WriteNumber("weight", part.Weight);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteEndObject();
    });

    private static void WriteTables(SavedModel model, int top)
    {
        var settings = new ResultTable("setting", "weight in the blend", "intercept", "not zero");
        for (int i = 0; i < model.Snapshot.Settings.Length; i++)
        {
            var setting = model.Snapshot.Settings[i];
            settings.Add(setting.Name, FigureText.Mean(model.Snapshot.Blend[i].Weight), FigureText.Coefficient(setting.Intercept), setting.NonZero.ToString(CultureInfo.InvariantCulture));
        }
        settings.Write(Terminal.Output);
        Console.Out.WriteLine();

        var coefficients = new ResultTable("feature", "coefficient");
        foreach (var (feature, value) in model.PublishedCoefficients().OrderByDescending(c => Math.Abs(c.Value)).ThenBy(c => c.Feature, StringComparer.Ordinal).Take(top))
            coefficients.Add(feature, FigureText.Coefficient(value));
        coefficients.Write(Terminal.Output);
        Console.Out.WriteLine();

        var parts = new ResultTable("part of the state", "blocks", "bytes");
        foreach (var part in model.Parts)
            parts.Add(part.Name, part.Blocks.ToString(CultureInfo.InvariantCulture), part.Bytes.ToString(CultureInfo.InvariantCulture));
        parts.Write(Terminal.Output);
        Console.Error.WriteLine(
            $"stream {model.Stream}, {model.Snapshot.Version} labels learned; coefficients of {model.PublishedSetting ?? "the blend"}, the largest of {model.Snapshot.Settings[0].Coefficients.Length}");
    }
}

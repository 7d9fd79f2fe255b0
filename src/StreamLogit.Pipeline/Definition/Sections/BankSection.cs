using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>learning.bank</c>: entries of an update rule with numbers, each number one or a list, whose product gives the settings.</summary>
internal static class BankSection
{
    public const int MostSettings = 64;
    private const string Default = "default";

    /// <summary>The settings in the order in which they are written, or null and errors.</summary>
    public static ImmutableArray<SettingOptions>? Read(ValueReader value, ImmutableArray<FeatureOptions>? features, ImmutableArray<SettingOptions> defaultBank)
    {
        if (value.Value.Kind == JsonValueKind.String)
        {
            if (value.Value.Text == Default) return defaultBank;
            value.UnknownName([Default]);
            return null;
        }
        if (value.List("entries, each an update rule with its numbers (or the string \"default\")", MostSettings) is not { } entries) return null;
        var settings = ImmutableArray.CreateBuilder<SettingOptions>();
        var origins = new Dictionary<string, string>(StringComparer.Ordinal);
        bool right = true;
        long count = 0;
        foreach (var entry in entries)
        {
            if (BankEntry.Read(entry, features) is not { } read)
            {
                right = false;
                continue;
            }
            count += read.Count;
            if (count > MostSettings) continue;
            foreach (var setting in read.Settings())
            {
                if (origins.TryAdd(setting.Name, entry.Path))
                {
                    settings.Add(setting);
                    continue;
                }
                entry.Error($"the setting {Quoted.Text(setting.Name)} is already made by {origins[setting.Name]}: settings must differ");
                right = false;
                break;
            }
        }
        if (count > MostSettings)
        {
            value.Error($"makes {count} settings; a bank has at most {MostSettings}");
            return null;
        }
        return right ? settings.ToImmutable() : null;
    }
}

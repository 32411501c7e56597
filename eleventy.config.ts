import type UserConfig from '@11ty/eleventy/UserConfig';
import ohmfolio from './plugins/ohmfolio.ts';

export default function configure(eleventyConfig: UserConfig): object {
  eleventyConfig.addPlugin(ohmfolio);
  eleventyConfig.addPassthroughCopy({ 'site/style.css': 'style.css' });
  return {
    dir: { input: 'site/pages', layouts: '../layouts', includes: '../layouts' },
    htmlTemplateEngine: 'njk',
  };
}

import {Injectable, inject} from '@angular/core';
import {Title} from '@angular/platform-browser';
import {TitleStrategy, type RouterStateSnapshot} from '@angular/router';

@Injectable()
export class PageTitles extends TitleStrategy {
  private readonly title = inject(Title);

  override updateTitle(state: RouterStateSnapshot): void {
    const page = this.buildTitle(state);
    this.title.setTitle(page ? `${page} · Fieldstead` : 'Fieldstead');
  }
}
